using System.Text.Json;

using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Report.Tables;

/// <summary>The part of assessment.json that says what ignorance of the inputs does to a region's answers.</summary>
internal static class UnknownsJson
{
    public static void Write(Utf8JsonWriter json, UnknownsResult unknowns)
    {
        json.WriteStartObject("unknowns");
        json.WriteNumber("samples", unknowns.Samples);
        json.WriteArray("verdicts", unknowns.Verdicts, WriteVerdict);
        json.WriteArray("first", unknowns.First, WriteFirst);
        json.WriteEndObject();
    }

    private static void WriteVerdict(Utf8JsonWriter json, VerdictSpread spread)
    {
        json.WriteStartObject();
        json.WriteString("modality", Names.Of(spread.Modality));
        json.WriteString("rule", spread.Rule);
        json.WriteString("measure", spread.Measure);
        json.WriteStartObject("trials");
        json.WriteCount("p05", spread.Trials.P05);
        json.WriteCount("p50", spread.Trials.P50);
        json.WriteCount("p95", spread.Trials.P95);
        json.WriteEndObject();
        if (spread.Minutes is { } minutes)
        {
            json.WriteStartObject("minutes");
            json.WriteFigure("p05", minutes.P05);
            json.WriteFigure("p50", minutes.P50);
            json.WriteFigure("p95", minutes.P95);
            json.WriteEndObject();
        }

        json.WriteFigure("assurance", spread.Assurance);
        json.WriteFigure("interaction_share", spread.Interaction);
        json.WriteArray("ranking", spread.Ranking, (j, effect) =>
        {
            j.WriteStartObject();
            j.WriteString("unknown", effect.Unknown);
            j.WriteCount("trials_fewest", effect.Fewest);
            j.WriteCount("trials_most", effect.Most);
            j.WriteFigure("value_at_fewest", effect.AtFewest);
            j.WriteFigure("value_at_most", effect.AtMost);
            j.WriteFigure("log_variance", effect.LogVariance);
            j.WriteEndObject();
        });
        json.WriteEndObject();
    }

    private static void WriteFirst(Utf8JsonWriter json, FirstModality first)
    {
        json.WriteStartObject();
        json.WriteString("rule", first.Rule);
        json.WriteString("modality", first.Modality is { } m ? Names.Of(m) : null);
        json.WriteFigure("share_of_samples", first.Modality is null ? null : first.Share);
        json.WriteString("flip", first.Flip);
        json.WriteEndObject();
    }
}
