using System.Text.Json;

using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Report.Answers;

namespace DeepSourceCheck.Report.Tables;

/// <summary>People, planned analyses and rate in assessment.json: members of a verdict, and `people` at the top.</summary>
internal static class ProtocolJson
{
    /// <summary>`people` at the top level: trials and participants of the recommended modality in the first region of the first response; empty where one person is planned for.</summary>
    public static void WritePeople(Utf8JsonWriter json, Assessment assessment)
    {
        PeopleResult? people = assessment.Responses is [{ Regions: [var region, ..] } first, ..]
            ? new RegionAnswer(assessment.For(first), first.Response, region).ForPeople?.Verdict.People : null;
        json.WriteArray("people", people?.Rows ?? [], (j, row) =>
        {
            j.WriteStartObject();
            j.WriteNumber("trials", row.Trials);
            j.WriteCount("participants", row.Participants);
            j.WriteEndObject();
        });
    }

    /// <summary>The members of one verdict; none for what the study does not ask.</summary>
    public static void Write(Utf8JsonWriter json, VerdictResult verdict)
    {
        if (verdict.People is { } people)
        {
            People(json, people);
        }

        if (verdict.Stopping is { } stopping)
        {
            Stopping(json, stopping);
        }

        if (verdict.Rate is { } rate)
        {
            Rate(json, rate);
        }
    }

    private static void People(Utf8JsonWriter json, PeopleResult people)
    {
        json.WriteStartObject("people");
        json.WriteArray("table", people.Rows, (j, row) =>
        {
            j.WriteStartObject();
            j.WriteNumber("trials", row.Trials);
            j.WriteFigure("effect_size", row.EffectSize);
            j.WriteCount("participants", row.Participants);
            j.WriteCount("invited", row.Invited);
            j.WriteEndObject();
        });
        json.WriteCount("session_trials", people.SessionTrials);
        json.WriteCount("participants_at_unlimited_trials", people.Unlimited);
        json.WriteFigure("power_of_stated_participants", people.PowerOfStated);
        json.WriteEndObject();
    }

    private static void Stopping(Utf8JsonWriter json, StoppingResult stopping)
    {
        json.WriteStartObject("stopping");
        json.WriteString("spending", Names.Of(stopping.Spending));
        json.WriteArray("analyses", stopping.Rows, (j, row) =>
        {
            j.WriteStartObject();
            j.WriteNumber("trials", row.Trials);
            j.WriteFigure("bound", row.Bound);
            j.WriteFigure("alpha_spent", row.Spent);
            j.WriteFigure("stop_probability", row.Stops);
            j.WriteFigure("stop_probability_without_response", row.StopsWithout);
            j.WriteEndObject();
        });
        json.WriteNumber("maximum_trials", stopping.Most);
        json.WriteFigure("expected_trials", stopping.Expected);
        json.WriteFigure("expected_trials_without_response", stopping.ExpectedWithout);
        json.WriteFigure("maximum_minutes", stopping.MostMinutes);
        json.WriteFigure("expected_minutes", stopping.ExpectedMinutes);
        if (stopping.FitsSession is { } fits)
        {
            json.WriteBoolean("maximum_fits_session", fits);
        }

        json.WriteEndObject();
    }

    private static void Rate(Utf8JsonWriter json, RateResult rate)
    {
        json.WriteStartObject("rate");
        json.WriteFigure("stated_per_s", rate.Stated);
        json.WriteFigure("best_per_s", rate.Best);
        json.WriteFigure("amplitude_at_best_over_stated", rate.Amplitude);
        json.WriteCount("trials_at_best", rate.Trials);
        json.WriteFigure("minutes_at_best", rate.Minutes);
        json.WriteFigure("minutes_saved", rate.Saved);
        json.WriteBoolean("responses_overlap_at_best", rate.Overlaps);
        json.WriteEndObject();
    }
}
