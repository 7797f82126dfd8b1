using System.Collections;
using System.Globalization;
using System.Text.Encodings.Web;
using System.Text.Json;

using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Report.Tables;

/// <summary>assessment.json: the machine-readable answer.</summary>
/// <remarks>
/// UTF-8, two spaces of indent, LF. Doubles have the shortest text that reads back to the same double; counts are integers.
/// A figure that does not exist is null, and `reason` beside it says why. Units stand in the keys, or beside the value as `unit`.
/// </remarks>
public static class AssessmentJson
{
    private static readonly JsonWriterOptions Options = new()
    {
        Indented = true,
        IndentSize = 2,
        NewLine = "\n",
        // A file, never markup: signs such as + and the micro sign stay readable.
        Encoder = JavaScriptEncoder.UnsafeRelaxedJsonEscaping,
    };

    /// <summary>The whole file as UTF-8 bytes, with a final line break.</summary>
    public static byte[] Bytes(Assessment assessment)
    {
        using MemoryStream stream = new();
        Write(assessment, stream);
        return stream.ToArray();
    }

    /// <summary>Writes the whole file to a stream.</summary>
    public static void Write(Assessment assessment, Stream stream)
    {
        using (Utf8JsonWriter json = new(stream, Options))
        {
            json.WriteStartObject();
            json.WriteStartObject("program");
            json.WriteString("name", ProgramName.Text);
            json.WriteString("version", assessment.Version);
            json.WriteEndObject();
            json.WriteString("title", assessment.Study.Title);
            Array(json, "inputs", assessment.Inputs, Input);
            Array(json, "assumptions", assessment.Assumptions, WriteAssumption);
            Strings(json, "warnings", assessment.Warnings);
            Count(json, "session_trials", assessment.SessionTrials);
            Array(json, "responses", assessment.Responses, WriteResponse);
            json.WriteStartArray("variants");
            json.WriteEndArray();
            json.WriteEndObject();
        }

        stream.WriteByte((byte)'\n');
    }

    private static void Input(Utf8JsonWriter json, InputFile file)
    {
        json.WriteStartObject();
        json.WriteString("path", file.Path);
        json.WriteString("sha256", file.Sha256);
        json.WriteEndObject();
    }

    private static void WriteAssumption(Utf8JsonWriter json, Assumption assumption)
    {
        json.WriteStartObject();
        json.WriteString("key", assumption.Key);
        json.WritePropertyName("value");
        Value(json, assumption.Value);
        json.WriteString("unit", assumption.Unit);
        json.WriteString("origin", assumption.FromStudy ? "study" : "default");
        json.WriteString("source", assumption.Source);
        json.WriteString("grade", assumption.Grade is { } grade ? Names.Of(grade) : null);
        json.WriteEndObject();
    }

    private static void Value(Utf8JsonWriter json, object? value)
    {
        switch (value)
        {
            case null:
                json.WriteNullValue();
                break;
            case string text:
                json.WriteStringValue(text);
                break;
            case bool flag:
                json.WriteBooleanValue(flag);
                break;
            case double or float:
                Number(json, Convert.ToDouble(value, CultureInfo.InvariantCulture));
                break;
            case int or long or short or byte or uint:
                json.WriteNumberValue(Convert.ToInt64(value, CultureInfo.InvariantCulture));
                break;
            case IEnumerable list:
                json.WriteStartArray();
                foreach (object? item in list)
                {
                    Value(json, item);
                }

                json.WriteEndArray();
                break;
            default:
                json.WriteStringValue(Convert.ToString(value, CultureInfo.InvariantCulture));
                break;
        }
    }

    private static void WriteResponse(Utf8JsonWriter json, ResponseResult response)
    {
        json.WriteStartObject();
        json.WriteString("name", response.Response.Name);
        Array(json, "regions", response.Regions, WriteRegion);
        json.WriteEndObject();
    }

    private static void WriteRegion(Utf8JsonWriter json, RegionResult region)
    {
        json.WriteStartObject();
        json.WriteString("region", region.Region);
        json.WriteNumber("dipoles", region.Dipoles);
        json.WriteNumber("dropped", region.Dropped);
        Figure(json, "spacing_mm", region.Spacing is { } h ? Si.ToMm(h) : null);
        Figure(json, "volume_mL", region.Volume is { } v ? Si.ToMillilitres(v) : null);
        Figure(json, "captured_field_share", region.FieldCaptured);
        if (region.Split is { } split)
        {
            json.WriteStartObject("split");
            WritePercentiles(json, "weakest_over_strongest", split.WeakestOverStrongest, allFive: false);
            WritePercentiles(json, "angle_to_radial_deg", split.AngleToRadialDeg, allFive: false);
            json.WriteNumber("undefined_dipoles", split.UndefinedDipoles);
            json.WriteNumber("degenerate_dipoles", split.DegenerateDipoles);
            json.WriteEndObject();
        }
        else
        {
            json.WriteNull("split");
        }

        Array(json, "results", region.Results, WriteMeasure);
        Array(json, "verdicts", region.Verdicts, WriteVerdict);
        Strings(json, "warnings", region.Warnings);
        json.WriteEndObject();
    }

    private static void WriteMeasure(Utf8JsonWriter json, MeasureResult row)
    {
        string? unit = row.Peak?.Unit;
        json.WriteStartObject();
        json.WriteString("modality", Names.Of(row.Modality));
        json.WriteString("direction", Names.Of(row.Direction));
        json.WriteString("measure", row.Measure);
        if (row.Peak is { } peak)
        {
            json.WriteStartObject("peak_amplitude");
            Figure(json, "value", peak.Value);
            json.WriteString("unit", peak.Unit);
            json.WriteString("channel", peak.Channel);
            json.WriteEndObject();
        }
        else
        {
            json.WriteNull("peak_amplitude");
        }

        WritePercentiles(json, "snr_db", row.SnrDb);
        Array(json, "targets", row.Targets, (j, t) => WriteTarget(j, t, unit));
        if (row.Reason is not null)
        {
            json.WriteString("reason", row.Reason);
        }

        if (row.AtLeak is { } leak)
        {
            json.WriteStartObject("at_leak");
            json.WriteNumber("leak", leak.Leak);
            WritePercentiles(json, "snr_db", leak.SnrDb);
            Array(json, "targets", leak.Targets, (j, t) => WriteTarget(j, t, unit));
            json.WriteEndObject();
        }

        json.WriteEndObject();
    }

    private static void WriteTarget(Utf8JsonWriter json, TargetResult target, string? unit)
    {
        json.WriteStartObject();
        json.WriteString("rule", target.Rule);
        json.WriteStartObject("trials");
        Count(json, "p05", target.Trials.P05);
        Count(json, "p25", target.Trials.P25);
        Count(json, "p50", target.Trials.P50);
        Count(json, "p75", target.Trials.P75);
        Count(json, "p95", target.Trials.P95);
        json.WriteEndObject();
        if (target.Minutes is { } minutes)
        {
            WritePercentiles(json, "minutes", minutes);
        }
        else
        {
            json.WriteNull("minutes");
        }

        Figure(json, "smallest_nAm", target.SmallestMoment is { } q ? Si.ToNanoAmpereMetres(q) : null);
        if (target.SmallestAmplitude is { } amplitude && unit is not null)
        {
            json.WriteStartObject("smallest_amplitude");
            Figure(json, "value", amplitude);
            json.WriteString("unit", unit);
            json.WriteEndObject();
        }

        if (target.Reason is not null)
        {
            json.WriteString("reason", target.Reason);
        }

        json.WriteEndObject();
    }

    private static void WriteVerdict(Utf8JsonWriter json, VerdictResult verdict)
    {
        json.WriteStartObject();
        json.WriteString("modality", Names.Of(verdict.Modality));
        json.WriteString("rule", verdict.Rule);
        json.WriteString("measure", verdict.Measure);
        json.WriteString("direction", Names.Of(verdict.Direction));
        json.WriteString("text", verdict.Text);
        if (verdict.FitsSession is { } fits)
        {
            json.WriteBoolean("fits_session", fits);
        }
        else
        {
            json.WriteNull("fits_session");
        }

        Figure(json, "assurance", verdict.Assurance);
        Array(json, "why", verdict.Chain, WriteStep);
        json.WriteEndObject();
    }

    private static void WriteStep(Utf8JsonWriter json, DerivedNumber step)
    {
        json.WriteStartObject();
        json.WriteString("symbol", step.Symbol);
        json.WriteString("name", step.Name);
        Figure(json, "value", step.Value);
        json.WriteString("unit", step.Unit);
        json.WriteString("formula", step.Formula);
        json.WriteString("source", step.Source);
        json.WriteString("grade", step.Grade is { } grade ? Names.Of(grade) : null);
        json.WriteEndObject();
    }

    private static void WritePercentiles(Utf8JsonWriter json, string name, Percentiles p, bool allFive = true)
    {
        json.WriteStartObject(name);
        Figure(json, "p05", p.P05);
        if (allFive)
        {
            Figure(json, "p25", p.P25);
        }

        Figure(json, "p50", p.P50);
        if (allFive)
        {
            Figure(json, "p75", p.P75);
        }

        Figure(json, "p95", p.P95);
        json.WriteEndObject();
    }

    private static void Array<T>(Utf8JsonWriter json, string name, IReadOnlyList<T> items, Action<Utf8JsonWriter, T> write)
    {
        json.WriteStartArray(name);
        foreach (T item in items)
        {
            write(json, item);
        }

        json.WriteEndArray();
    }

    private static void Strings(Utf8JsonWriter json, string name, IReadOnlyList<string> items) =>
        Array(json, name, items, (j, text) => j.WriteStringValue(text));

    private static void Count(Utf8JsonWriter json, string name, long? value)
    {
        if (value is { } count)
        {
            json.WriteNumber(name, count);
        }
        else
        {
            json.WriteNull(name);
        }
    }

    private static void Figure(Utf8JsonWriter json, string name, double? value)
    {
        json.WritePropertyName(name);
        if (value is { } number)
        {
            Number(json, number);
        }
        else
        {
            json.WriteNullValue();
        }
    }

    // JSON has no NaN and no infinity: both are figures that do not exist.
    private static void Number(Utf8JsonWriter json, double value)
    {
        if (double.IsFinite(value))
        {
            json.WriteNumberValue(value + 0.0);
        }
        else
        {
            json.WriteNullValue();
        }
    }
}
