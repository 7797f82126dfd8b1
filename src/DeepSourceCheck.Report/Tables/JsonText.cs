using System.Collections;
using System.Globalization;
using System.Text.Encodings.Web;
using System.Text.Json;

using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Report.Answers;

namespace DeepSourceCheck.Report.Tables;

/// <summary>How every JSON text of the program is written, in files and on standard output.</summary>
/// <remarks>
/// Two spaces of indent, LF. Doubles have the shortest text that reads back to the same double; counts are integers. JSON has no NaN and no infinity:
/// figures that do not exist are null.
/// </remarks>
public static class JsonText
{
    /// <summary>Options of every writer.</summary>
    public static readonly JsonWriterOptions Options = new()
    {
        Indented = true,
        IndentSize = 2,
        NewLine = "\n",
        // A file, never markup: signs such as + and the micro sign stay readable.
        Encoder = JavaScriptEncoder.UnsafeRelaxedJsonEscaping,
    };

    /// <summary>`program`: name and version.</summary>
    public static void WriteProgram(this Utf8JsonWriter json, string version)
    {
        json.WriteStartObject("program");
        json.WriteString("name", ProgramName.Text);
        json.WriteString("version", version);
        json.WriteEndObject();
    }

    /// <summary>A list, each item by <paramref name="write"/>.</summary>
    public static void WriteArray<T>(this Utf8JsonWriter json, string name, IEnumerable<T> items, Action<Utf8JsonWriter, T> write)
    {
        json.WriteStartArray(name);
        foreach (T item in items)
        {
            write(json, item);
        }

        json.WriteEndArray();
    }

    /// <summary>A list of texts.</summary>
    public static void WriteStrings(this Utf8JsonWriter json, string name, IEnumerable<string> items) =>
        json.WriteArray(name, items, static (j, text) => j.WriteStringValue(text));

    /// <summary>A count, or null.</summary>
    public static void WriteCount(this Utf8JsonWriter json, string name, long? value)
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

    /// <summary>A figure; null where there is none, or where it is not finite.</summary>
    public static void WriteFigure(this Utf8JsonWriter json, string name, double? value)
    {
        json.WritePropertyName(name);
        json.WriteFigureValue(value);
    }

    /// <summary>A value that entered the answer.</summary>
    public static void WriteAssumption(this Utf8JsonWriter json, Assumption assumption)
    {
        json.WriteStartObject();
        json.WriteString("key", assumption.Key);
        json.WritePropertyName("value");
        json.WriteStudyValue(assumption.Value);
        json.WriteString("unit", assumption.Unit);
        json.WriteString("origin", assumption.FromStudy ? "study" : "default");
        json.WriteString("source", assumption.Source);
        json.WriteString("grade", assumption.Grade is { } grade ? Names.Of(grade) : null);
        json.WriteEndObject();
    }

    /// <summary>One number of the chain from moment to minutes.</summary>
    public static void WriteDerivedNumber(this Utf8JsonWriter json, DerivedNumber number)
    {
        json.WriteStartObject();
        json.WriteString("symbol", number.Symbol);
        json.WriteString("name", number.Name);
        json.WriteFigure("value", number.Value);
        json.WriteString("unit", number.Unit);
        json.WriteString("formula", number.Formula);
        json.WriteString("source", number.Source);
        json.WriteString("grade", number.Grade is { } grade ? Names.Of(grade) : null);
        json.WriteEndObject();
    }

    /// <summary>What a verdict stands on and says, without its chain: members of an open object.</summary>
    public static void WriteVerdictMembers(this Utf8JsonWriter json, VerdictResult verdict)
    {
        json.WriteString("modality", Names.Of(verdict.Modality));
        json.WriteString("rule", verdict.Rule);
        json.WriteString("measure", verdict.Measure);
        json.WriteString("direction", Names.Of(verdict.Direction));
        json.WriteString("text", verdict.Text);
    }

    /// <summary>What a realistic head changes at library regions: `realistic_head`, one entry a region; empty where nothing was measured.</summary>
    public static void WriteRealisticHeads(this Utf8JsonWriter json, IEnumerable<RealisticHeadEffect> effects) => json.WriteArray("realistic_head", effects, static (j, effect) =>
    {
        j.WriteStartObject();
        j.WriteString("region", effect.Region);
        j.WriteString("measured_side", effect.MeasuredSide);
        j.WriteString("against", RealisticHead.Spheres);
        j.WriteString("direction", Names.Of(DirectionName.Isotropic));
        j.WriteArray("changes", RealisticHead.Changes(effect), static (k, change) =>
        {
            k.WriteStartObject();
            k.WriteString("modality", Names.Of(change.Modality));
            k.WriteString("measure", change.Measure);
            k.WriteNumber("phantom_db", change.Phantom);
            k.WriteNumber("phantom_trials_factor", HeadChange.TrialsFactor(change.Phantom));
            k.WriteNumber("real_head_db", change.RealHead);
            k.WriteNumber("real_head_trials_factor", HeadChange.TrialsFactor(change.RealHead));
            k.WriteEndObject();
        });
        j.WriteNumber("weakest_over_strongest", effect.WeakestOverStrongest);
        j.WriteNumber("weakest_to_outward_deg", effect.WeakestToOutwardDeg);
        j.WriteEndObject();
    });

    private static void WriteFigureValue(this Utf8JsonWriter json, double? value)
    {
        if (value is { } number && double.IsFinite(number))
        {
            json.WriteNumberValue(number + 0.0);                // no negative zero
        }
        else
        {
            json.WriteNullValue();
        }
    }

    private static void WriteStudyValue(this Utf8JsonWriter json, object? value)
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
            case double number:
                json.WriteFigureValue(number);
                break;
            case int or long:
                json.WriteNumberValue(Convert.ToInt64(value, CultureInfo.InvariantCulture));
                break;
            case IEnumerable list:
                json.WriteStartArray();
                foreach (object? item in list)
                {
                    json.WriteStudyValue(item);
                }

                json.WriteEndArray();
                break;
            default:
                json.WriteStringValue(Convert.ToString(value, CultureInfo.InvariantCulture));
                break;
        }
    }
}
