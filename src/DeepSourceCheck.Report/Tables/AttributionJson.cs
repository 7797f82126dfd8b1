using System.Text.Json;

using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Report.Tables;

/// <summary>The part of assessment.json that says what else could be active, where the response could be placed, and which electrodes carry it.</summary>
internal static class AttributionJson
{
    /// <summary>`competitors`, `location`, `electrodes`: members of an open region; each only where it was computed.</summary>
    public static void Write(Utf8JsonWriter json, RegionResult region)
    {
        if (region.Competitors is { } competitors)
        {
            Competitors(json, competitors);
        }

        if (region.Location is { } location)
        {
            Location(json, location);
        }

        if (region.Electrodes is { } electrodes)
        {
            Electrodes(json, electrodes);
        }
    }

    private static void Competitors(Utf8JsonWriter json, CompetitorsResult competitors)
    {
        json.WriteStartObject("competitors");
        json.WriteString("direction", Names.Of(competitors.Direction));
        json.WriteNumber("dipoles", competitors.Dipoles);
        json.WriteArray("sources", competitors.Sources, static (j, source) =>
        {
            j.WriteStartObject();
            j.WriteString("region", source.Region);
            j.WriteFigure("moment_nAm", Si.ToNanoAmpereMetres(source.Moment));
            j.WriteNumber("dipoles", source.Dipoles);
            j.WriteArray("overlap", source.Overlaps, static (k, overlap) =>
            {
                k.WriteStartObject();
                k.WriteString("modality", Names.Of(overlap.Modality));
                k.WriteNumber("patterns", overlap.Patterns);
                Five(k, "angle_deg", overlap.AngleDeg, x => x);
                k.WriteStartArray("principal_angles_deg");
                foreach (double angle in overlap.PrincipalAnglesDeg)
                {
                    k.WriteNumberValue(angle);
                }

                k.WriteEndArray();
                Five(k, "power_left_alone_db", overlap.PowerLeftDb, x => x);
                k.WriteEndObject();
            });
            j.WriteEndObject();
        });
        json.WriteArray("results", competitors.Readings, static (j, reading) =>
        {
            j.WriteStartObject();
            j.WriteString("modality", Names.Of(reading.Modality));
            j.WriteString("measure", reading.Measure);
            j.WriteBoolean("verdict", reading.IsVerdict);
            if (reading.Rms is { } rms)
            {
                j.WriteStartObject("competitor_rms");
                j.WriteFigure("value", rms.Value);
                j.WriteString("unit", rms.Unit);
                j.WriteString("channel", rms.Channel);
                j.WriteEndObject();
            }
            else
            {
                j.WriteNull("competitor_rms");
            }

            Five(j, "power_left_db", reading.PowerLeftDb, x => x);
            Five(j, "snr_db", reading.SnrDb, x => x);
            j.WriteArray("targets", reading.Counts, static (k, count) =>
            {
                k.WriteStartObject();
                k.WriteString("rule", count.Rule);
                k.WriteCount("trials_without", count.Without);
                k.WriteStartObject("trials");
                k.WriteCount("p05", count.Trials.P05);
                k.WriteCount("p25", count.Trials.P25);
                k.WriteCount("p50", count.Trials.P50);
                k.WriteCount("p75", count.Trials.P75);
                k.WriteCount("p95", count.Trials.P95);
                k.WriteEndObject();
                k.WriteArray("why", count.Chain, JsonText.WriteDerivedNumber);
                k.WriteEndObject();
            });
            j.WriteEndObject();
        });
        json.WriteEndObject();
    }

    private static void Location(Utf8JsonWriter json, LocationResult location)
    {
        json.WriteStartObject("location");
        json.WriteCount("trials", location.Trials);
        json.WriteString("direction", Names.Of(location.Direction));
        json.WriteNumber("dipoles", location.Dipoles);
        json.WriteFigure("head_radius_mm", location.HeadRadius is { } radius ? Si.ToMm(radius) : null);
        json.WriteArray("results", location.Bounds, static (j, bound) =>
        {
            j.WriteStartObject();
            j.WriteString("modality", Names.Of(bound.Modality));
            j.WriteBoolean("localisable", bound.Localisable);
            Five(j, "bound_mm", bound.Bound, Si.ToMm);
            j.WriteFigure("model_error_mm", Si.ToMm(bound.ModelError));
            Five(j, "error_mm", bound.Error, Si.ToMm);
            j.WriteArray("why", bound.Chain, JsonText.WriteDerivedNumber);
            j.WriteEndObject();
        });
        if (location.Reason is { } reason)
        {
            json.WriteString("reason", reason);
        }

        json.WriteEndObject();
    }

    private static void Electrodes(Utf8JsonWriter json, SensorChoiceResult chosen)
    {
        json.WriteStartObject("electrode_choice");
        json.WriteString("direction", Names.Of(chosen.Direction));
        json.WriteNumber("dipoles", chosen.Dipoles);
        json.WriteArray("greedy", chosen.Steps.Select((step, k) => (step, k)), static (j, entry) =>
        {
            j.WriteStartObject();
            j.WriteNumber("electrodes", entry.k + 1);
            j.WriteString("added", entry.step.Electrode);
            j.WriteFigure("snr_db", entry.step.SnrDb);
            j.WriteArray("targets", entry.step.Trials, Count);
            j.WriteEndObject();
        });
        json.WriteArray("derivations", chosen.Derivations, static (j, pair) =>
        {
            j.WriteStartObject();
            j.WriteString("derivation", pair.Name);
            j.WriteFigure("snr_db", pair.SnrDb);
            j.WriteArray("targets", pair.Trials, Count);
            j.WriteEndObject();
        });
        json.WriteEndObject();
    }

    private static void Count(Utf8JsonWriter json, (string Rule, long? Trials) target)
    {
        json.WriteStartObject();
        json.WriteString("rule", target.Rule);
        json.WriteCount("trials", target.Trials);
        json.WriteEndObject();
    }

    private static void Five(Utf8JsonWriter json, string name, Percentiles p, Func<double, double> unit)
    {
        json.WriteStartObject(name);
        foreach ((string key, double? value) in new[] { ("p05", p.P05), ("p25", p.P25), ("p50", p.P50), ("p75", p.P75), ("p95", p.P95) })
        {
            json.WriteFigure(key, value is { } v ? unit(v) : null);
        }

        json.WriteEndObject();
    }
}
