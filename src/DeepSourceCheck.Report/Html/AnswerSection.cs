using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Report.Answers;
using DeepSourceCheck.Report.Figures;

namespace DeepSourceCheck.Report.Html;

/// <summary>The first screen of a response: headline, verdicts with their strip, peaks, smallest source, caution; then the other regions and rules.</summary>
internal static class AnswerSection
{
    private const int StripWidth = 740;

    public static void Write(Markup html, Assessment assessment, int index)
    {
        ResponseResult response = assessment.Responses[index];
        assessment = assessment.For(response);
        html.Open("section", "class", "answer", "id", index == 0 ? "answer" : $"answer-{index + 1}");
        if (response.Regions.Count == 0)
        {
            html.Element(index == 0 ? "h1" : "h2", $"{response.Response.Name}: no region").CloseLine();
            return;
        }

        RegionAnswer answer = new(assessment, response.Response, response.Regions[0]);
        Place(html, assessment, response);
        html.Element(index == 0 ? "h1" : "h2", answer.Headline() + ".").Raw("\n");
        html.Open("p", "class", "lead").Element("b", answer.Recommendation() + " ").Text(answer.Reason()).CloseLine();
        Strip(html, assessment, answer, index);
        html.Open("div", "class", "columns").Raw("\n");
        Peaks(html, answer);
        Smallest(html, assessment, answer);
        Changes(html, assessment, answer);
        Caution(html);
        html.CloseLine();
        if (response.Regions.Count > 1)
        {
            Regions(html, assessment, response);
        }

        OtherRules(html, assessment, response, answer);
        html.CloseLine();
    }

    private static void Place(Markup html, Assessment assessment, ResponseResult response)
    {
        Response stated = response.Response;
        RegionResult first = response.Regions[0];
        string others = response.Regions.Count switch { 1 => "", 2 => "; one more region below", _ => $"; {response.Regions.Count - 1} more regions below" };
        html.Open("p", "class", "place").Element("b", assessment.Study.Title)
            .Text($"{stated.Name}, {first.Region}: {Say.Plural(first.Dipoles, "dipole")}, {Say.Strength(stated, first)} {Say.Direction(stated.Direction)}, "
                + $"{Say.Convention(stated.Measured)}, {Say.Recorded(stated)}{(Say.Course(response) is { Length: > 0 } course ? "; " + course : "")}{others}").CloseLine();
    }

    private static void Strip(Markup html, Assessment assessment, RegionAnswer answer, int index)
    {
        html.Open("div", "class", "strip").Open("div", "class", "rows").Raw("\n");
        foreach (ModalityAnswer a in answer.Answers)
        {
            html.Open("div", "class", "verdict").Raw(InlineFigure.Mark(a.Modality)).Open("div")
                .Element("p", a.Line(), "class", "count", "data-testid", $"verdict-{index}-{Names.Of(a.Modality)}")
                .Open("p").Element("b", a.Modality == Modality.Both ? "Both together" : Names.Of(a.Modality)).Text(MeasureWords(answer, a)).Close()
                .Element("p", Below(a), "class", "small").Close().CloseLine();
        }

        string sure = answer.Answers.All(a => a.Verdict.Assurance is null) ? " How sure: not asked, the study states no unknowns." : "";
        html.Element("p", $"Accepted trials. Target: {TrialsFigure.RuleWords(assessment, answer.Response, answer.Rule)}{TrialsFigure.Protocol(assessment)}.{Shared(assessment)}{sure}", "class", "small under");
        html.CloseLine();
        string alt = $"Trials on a logarithmic axis. {string.Join(" ", answer.Answers.Select(a => $"{RegionAnswer.Words(a.Modality)}: {a.Line()}."))}";
        html.Open("figure", "style", "border:0;padding:0");
        using (FigureSheet wide = TrialsFigure.Strip(assessment, answer, StripWidth, named: false))
        {
            html.Raw(InlineFigure.Svg(wide, $"s{index}w", alt, "normal"));
        }

        using (FigureSheet narrow = TrialsFigure.Strip(assessment, answer, Figure.PhoneWidth, named: true))
        {
            html.Raw(InlineFigure.Svg(narrow, $"s{index}n", alt, "narrow"));
        }

        html.Open("figcaption").Open("span", "class", "key");
        Key(html, InlineFigure.PlaceKey, $"{Say.Spread(answer.Answers[0].Verdict.Direction)} in the region, 5 to 95 %, gaps at the quartiles");
        if (assessment.SessionTrials is not null)
        {
            Key(html, InlineFigure.PlumbKey, "longer than the session");
        }

        html.Close().Close().CloseLine();
        html.CloseLine();
    }

    // Counts and minutes are those of one average: said wherever a session holds several.
    private static string Shared(Assessment assessment) => Say.Averages(assessment.Study.Protocol) is { Length: > 0 } each ? $" Trials and minutes are for {each}." : "";

    internal static void Key(Markup html, string picture, string words) => html.Open("span").Raw(picture).Text(words).Close();

    private static string MeasureWords(RegionAnswer answer, ModalityAnswer a) =>
        a.Modality == Modality.Both ? (answer.Joint() is { Length: > 0 } joint ? $": {joint.TrimEnd('.')}" : "") : $", {a.Verdict.Measure}";

    private static string Below(ModalityAnswer a)
    {
        string range = a.Range();
        string sure = a.Verdict.Assurance is { } share ? $"{Say.Assurance(share)} assured" : "";
        string leak = a.Row?.AtLeak is { } l && l.Targets.FirstOrDefault(t => t.Rule == a.Verdict.Rule) is { } t
            ? $"at the published leak of {Say.Stated(l.Leak)}: {(t.Trials.P50 is { } n && n <= Say.MostTrials ? Say.Plural(n, "trial") : Say.OutOfReach)}" : "";
        string first = range.Length > 0 ? range : leak.Length > 0 ? leak : a.Reason ?? "";
        string miss = a.Verdict.Missing is { } chance ? $"{Say.Chance(chance)} chance to miss it in the session" : "";
        return string.Join("; ", new[] { first, sure, miss }.Where(p => p.Length > 0));
    }

    private static void Peaks(Markup html, RegionAnswer answer)
    {
        html.Open("div").Element("h3", "Predicted peak").Element("p", $"largest channel, {Say.Convention(answer.Response.Measured)}, without noise, median over the region", "class", "small").Open("div", "class", "pairs");
        foreach (ModalityAnswer a in answer.Answers.Where(a => a.Modality != Modality.Both))
        {
            html.Raw(InlineFigure.Mark(a.Modality)).Open("div");
            if (a.Row?.Peak is { } peak)
            {
                html.Element("b", $"{Say.Two(peak.Value)} {Say.Unit(peak.Unit)}").Element("p", $"{Names.Of(a.Modality)} at {peak.Channel}", "class", "small");
            }
            else
            {
                html.Element("b", $"{Names.Of(a.Modality)}: none").Element("p", a.Reason ?? "no figure", "class", "small");
            }

            html.Close();
        }

        html.Close().CloseLine();
    }

    private static void Smallest(Markup html, Assessment assessment, RegionAnswer answer)
    {
        html.Open("div").Element("h3", "Smallest detectable source");
        if (assessment.SessionTrials is not { } session)
        {
            html.Element("p", "Not asked: the study states no session.", "class", "small").CloseLine();
            return;
        }

        html.Element("p", $"moment that {Say.Plural(session, "trial")} reach; assumed: {Say.Strength(answer.Response, answer.Region)}", "class", "small").Open("div", "class", "pairs");
        foreach (ModalityAnswer a in answer.Answers)
        {
            html.Raw(InlineFigure.Mark(a.Modality)).Open("div");
            if (a.Target?.SmallestMoment is { } moment)
            {
                html.Element("b", $"{Say.Two(Si.ToNanoAmpereMetres(moment))} nAm");
                string amplitude = a.Target.SmallestAmplitude is { } v && a.Row?.Peak is { } peak ? $", {Say.Two(v)} {Say.Unit(peak.Unit)} at the largest channel" : "";
                html.Element("p", (a.Modality == Modality.Both ? "both together" : Names.Of(a.Modality)) + amplitude, "class", "small");
            }
            else
            {
                html.Element("b", $"{(a.Modality == Modality.Both ? "Both" : Names.Of(a.Modality))}: none").Element("p", a.Reason ?? "no figure", "class", "small");
            }

            html.Close();
        }

        html.Close().CloseLine();
    }

    private static void Changes(Markup html, Assessment assessment, RegionAnswer answer)
    {
        html.Open("div").Element("h3", "What would change the answer");
        List<string> lines = [];
        foreach (ModalityAnswer a in answer.Answers.Where(a => a.Modality != Modality.Both && a.Target?.SmallestMoment is not null))
        {
            string moment = $"{Say.Two(Si.ToNanoAmpereMetres(a.Target!.SmallestMoment!.Value))} nAm";
            lines.Add(a.Outcome == Outcome.Fits ? $"{Names.Of(a.Modality)} no longer fits below {moment}." : $"{Names.Of(a.Modality)} fits from {moment}.");
        }

        html.Element("p", lines.Count > 0 ? $"Moment, {Say.Strength(answer.Response, answer.Region)} assumed:" : assessment.SessionTrials is null ? "Not asked: the study states no session." : "No moment changes a direction that is silent.", "class", "small");
        foreach (string line in lines)
        {
            html.Element("p", line);
        }

        if (answer.Region.Unknowns is { } unknowns)
        {
            foreach (VerdictSpread spread in unknowns.Verdicts.Where(v => v.Rule == answer.Rule && v.Modality != Modality.Both))
            {
                if (spread.Ranking is [{ LogVariance: > 0 } effect, ..])
                {
                    html.Element("p", $"{Names.Of(spread.Modality)}: {UnknownWords.Name(effect.Unknown)}, {UnknownWords.Range(effect.Unknown, assessment.Study, answer.Response)}, gives {UnknownWords.Trials(effect.Fewest, effect.Most)} trials.");
                }
            }

            if (unknowns.First.FirstOrDefault(f => f.Rule == answer.Rule) is { Flip.Length: > 0 } first)
            {
                html.Element("p", first.Flip + ".", "class", "small");
            }
        }
        else if (lines.Count > 0)
        {
            html.Element("p", "Everything else as assumed. Other inputs change the answer too: run the study again with them.", "class", "small");
        }

        html.CloseLine();
    }

    private static void Caution(Markup html)
    {
        html.Open("div", "class", "caution").Open("h3").Raw(InlineFigure.Triangle).Text("Caution: detected is not located").Close()
            .Element("p", "These counts say when the response stands out from noise. They do not say where it comes from.")
            .Element("p", Cautions.InOneLine, "class", "small")
            .Open("p", "class", "small").Element("a", "All cautions in full", "href", "#cautions").Close().CloseLine();
    }

    private static void Regions(Markup html, Assessment assessment, ResponseResult response)
    {
        html.Element("h3", "By region", "class", "ruled", "style", "margin-top:28px");
        Modality[] modalities = [.. response.Regions.SelectMany(r => r.Verdicts).Select(v => v.Modality).Distinct().Order()];
        string[] note = response.Regions.Any(r => r.Warnings.Count > 0) ? ["note"] : [], noteClass = note.Length > 0 ? ["long"] : [];
        HtmlReport.Table(html, $"Verdicts by region, {response.Response.Name}",
            ["region", .. modalities.Select(RegionAnswer.Words), .. note],
            response.Regions.Select(r =>
            {
                RegionAnswer a = new(assessment, response.Response, r);
                return (IReadOnlyList<string>)[r.Region, .. modalities.Select(m => a.Of(m)?.Line() ?? ""), .. note.Select(_ => WarningText.InRow(r.Region, r.Warnings))];
            }),
            ["", .. modalities.Select(_ => "verdict-cell"), .. noteClass]);
    }

    private static void OtherRules(Markup html, Assessment assessment, ResponseResult response, RegionAnswer shown)
    {
        string[] rules = [.. response.Regions.SelectMany(r => r.Verdicts).Select(v => v.Rule).Distinct().Where(r => r != shown.Rule)];
        foreach (string rule in rules)
        {
            html.Element("h3", $"By another target: {TrialsFigure.RuleWords(assessment, response.Response, rule)}", "class", "ruled", "style", "margin-top:28px");
            string[] columns = ["region", "modality", "measure", "verdict", "range", "chance to miss"];
            string[][] rows =
            [
                .. response.Regions.SelectMany(r => new RegionAnswer(assessment, response.Response, r, rule).Answers.Select(a => new[]
                {
                    r.Region, RegionAnswer.Words(a.Modality), a.Reading(), a.Line(), a.Range(), a.Verdict.Missing is { } miss ? Say.Chance(miss) : "",
                })),
            ];
            int[] filled = [.. Enumerable.Range(0, columns.Length).Where(k => rows.Any(row => row[k].Length > 0))];
            HtmlReport.Table(html, $"Verdicts by {Say.RuleKey(rule)}", [.. filled.Select(k => columns[k])], rows.Select(row => (IReadOnlyList<string>)[.. filled.Select(k => row[k])]));
        }
    }
}
