using System.Text;

using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Report.Answers;

namespace DeepSourceCheck.Report.Console;

/// <summary>The answer as `assess` prints it: at most 79 columns, ASCII unless a UTF-8 terminal reads it.</summary>
/// <remarks>Marks: `o` EEG, `*` MEG, `#` both, `=` 5 to 95 % of places, `|` session, `.` powers of ten. Colour on marks and `!` only.</remarks>
public static class ConsoleSummary
{
    private const int MeasureWidth = 14;
    private const int NameWidth = 32;
    private const int MostRegions = 12;
    private const int MostWarnings = 3;

    /// <summary>The whole text, with a final line break.</summary>
    /// <param name="assessment">The answer.</param>
    /// <param name="outputPath">Result folder as the user named it.</param>
    /// <param name="terminal">True where a terminal reads it.</param>
    /// <param name="unicode">True where the output is UTF-8.</param>
    /// <param name="color">True where colour is wanted (NO_COLOR not set); heeded on a terminal only.</param>
    /// <param name="files">Number of files written; 0: not said.</param>
    /// <param name="report">False where report.html was left out.</param>
    public static string Of(Assessment assessment, string outputPath, bool terminal, bool unicode, bool color, int files = 0, bool report = true)
    {
        bool wide = terminal && unicode;
        Ink ink = new(terminal && color);
        StringBuilder text = new();
        text.Append(WhyText.Wrap(assessment.Study.Title, 0));
        foreach (ResponseResult response in assessment.Responses)
        {
            Response(text, assessment, response, ink);
        }

        text.Append('\n');
        IReadOnlyList<string> warnings = WarningText.Grouped(assessment.Warnings);
        foreach (string warning in warnings.Take(MostWarnings))
        {
            text.Append(ink.Alert).Append(WhyText.Wrap(warning, 2).AsSpan(1));
        }

        if (warnings.Count > MostWarnings)
        {
            text.Append($"  {Say.Plural(warnings.Count - MostWarnings, "more warning")} in {(report ? "report.html" : "assessment.json")}.\n");
        }

        IReadOnlyList<(string Heading, string Text)> cautions = Cautions.All;
        string more = report ? $"{cautions.Count - 1} more cautions in report.html." : string.Join(" ", cautions.Skip(1).Select(c => c.Heading));
        text.Append(ink.Alert).Append(WhyText.Wrap($"{cautions[0].Heading} {more}", 2).AsSpan(1));
        text.Append($"  {Cautions.InOneLine}\n");
        string what = string.Join(", ", new[] { report ? "report.html" : "", files > 0 ? Say.Plural(files, "file") : "" }.Where(w => w.Length > 0));
        text.Append($"Written: {outputPath.TrimEnd('/', '\\')}/{(what.Length > 0 ? $" ({what})" : "")}\n");
        return WhyText.Plain(text.ToString(), wide);
    }

    private static void Response(StringBuilder text, Assessment assessment, ResponseResult response, Ink ink)
    {
        if (response.Regions.Count == 0)
        {
            return;
        }

        assessment = assessment.For(response);
        RegionAnswer answer = new(assessment, response.Response, response.Regions[0]);
        Response stated = response.Response;
        text.Append(WhyText.Wrap($"{stated.Name}, {answer.Region.Region}: {Say.Plural(answer.Region.Dipoles, "dipole")}, {Say.Strength(stated, answer.Region)} {Say.Direction(stated.Direction)}", 0));
        string course = stated.Steady is null ? Say.Course(response) : string.Join("; ", new[] { Say.Recorded(stated), Say.Course(response) }.Where(c => c.Length > 0));
        if (course.Length > 0)
        {
            text.Append(WhyText.Wrap(course, 0));
        }

        text.Append(WhyText.Wrap(Conditions(assessment, answer), 0));
        text.Append('\n').Append(WhyText.Wrap(string.Join(" ", answer.Answers.Where(a => a.Modality != Modality.Both || answer.Answers.Count == 1).Select(a => Sentence(assessment, a))), 0)).Append('\n');
        Table(text, answer);
        text.Append('\n').Append(ConsoleChart.Of(assessment, answer, ink)).Append('\n');
        Rules(text, assessment, response, answer.Region);
        Facts(text, assessment, answer);
        Others(text, assessment, response, answer);
        Variants(text, assessment, response, answer.Region);
    }

    // Rules side by side, a row each; a single rule stands in the table above.
    private static void Rules(StringBuilder text, Assessment assessment, ResponseResult response, RegionResult region)
    {
        IReadOnlyList<RuleRow> rows = RuleRow.Of(assessment, response.Response, region);
        if (rows.Count < 2)
        {
            return;
        }

        const int NameLength = 31;
        Modality[] modalities = [.. rows[0].Answer.Answers.Select(a => a.Modality).Where(m => m != Modality.Both)];
        text.Append($"{"by rule",-NameLength}{string.Concat(modalities.Select(m => $"{Names.Of(m) + " trials",14}{"minutes",9}"))}\n");
        foreach (RuleRow row in rows)
        {
            text.Append($"{row.Label,-NameLength}");
            foreach (Modality modality in modalities)
            {
                ModalityAnswer? answer = row.Answer.Of(modality);
                bool counted = answer is { HasCount: true };
                string count = counted ? Say.Trials(answer!.Trials) : answer is { Outcome: Outcome.Silent } ? "silent" : answer is { Outcome: Outcome.DoesNotApply } ? answer.NoCount : answer is { Trials: not null } || answer?.Verdict.Chain.Count > 0 ? Say.OutOfReach : "-";
                text.Append($"{count,14}{(counted && answer!.Minutes is { } m ? m < 0.1 ? "< 0.1" : Say.Minutes(m) : "-"),9}");
            }

            text.Append('\n');
        }

        text.Append('\n');
    }

    // A row each; change is that of the SNR in dB, the study's own row has none.
    private static void Variants(StringBuilder text, Assessment assessment, ResponseResult response, RegionResult region)
    {
        IReadOnlyList<VariantRow> rows = VariantRow.Of(assessment, response, region);
        if (rows.Count == 1)
        {
            return;
        }

        const int NameLength = 27;
        Modality[] modalities = [.. rows[0].Answer!.Answers.Select(a => a.Modality).Where(m => m != Modality.Both)];
        text.Append($"\n{"variant",-NameLength}{string.Concat(modalities.Select(m => $"{Names.Of(m) + " trials",15}{"change",9}"))}\n");
        foreach (VariantRow row in rows)
        {
            string name = row.Name.Length < NameLength ? row.Name : row.Name[..(NameLength - 4)] + "...";
            text.Append($"{name,-NameLength}");
            foreach (Modality modality in modalities)
            {
                ModalityAnswer? answer = row.Answer?.Of(modality);
                string count = answer is null ? "-" : answer.Outcome == Outcome.Silent ? "silent" : answer.Outcome == Outcome.DoesNotApply ? answer.NoCount : Say.Trials(answer.Trials);
                text.Append($"{count,15}{(row.Change(modality) is { } db ? Say.SignedDecibels(db) + " dB" : ""),9}");
            }

            text.Append('\n');
        }
    }

    private static string Conditions(Assessment assessment, RegionAnswer answer)
    {
        string rule = assessment.Study.Targets.FirstOrDefault(t => Names.Of(t) == answer.Rule) is { } t ? Say.Rule(t, answer.Response.Measured) : Say.RuleKey(answer.Rule);
        if (assessment.Study.Protocol is not { } p)
        {
            return $"{rule}; no protocol stated";
        }

        string rejected = p.RejectedFraction > 0 ? $", {Say.Percent(p.RejectedFraction)} rejected" : "";
        string session = assessment.SessionTrials is { } n ? $"; {Say.Session(p, n)}" : "; no session stated";
        return $"{rule}; {Say.Stated(p.Rate)}/s{rejected}{session}";
    }

    private static string Sentence(Assessment assessment, ModalityAnswer a)
    {
        string name = Names.Of(a.Modality);
        string each = OneAcquisition(assessment) ? "" : " per average";
        string minutes = a.Minutes is not null ? $"{a.MinutesWords()} min{each}" : a.Trials is { } n ? Say.Plural(n, "trial") : "";
        // The excess of the minutes as they are written, so that the sentence adds up; one that rounds away is not named.
        string over = a.Minutes is { } needed && assessment.Study.Protocol?.Session is { } s && OneAcquisition(assessment) && Rounded.AsWritten(needed) - s / 60 is >= 0.1 and var excess
            ? $": too long by {Say.Minutes(excess)} min" : ": too long";
        return a.Outcome switch
        {
            Outcome.Fits => $"{name} reaches the target in {minutes}.",
            Outcome.TooLong => $"{name} needs {minutes}{over}.",
            Outcome.NoSession => $"{name} needs {minutes}.",
            Outcome.Silent => $"{name} is silent in this direction.",
            Outcome.DoesNotApply => $"The rule does not apply to {name}{(a.Reason is { } reason ? $": {reason}" : "")}.",
            _ => $"{name} is {Say.OutOfReach} by averaging.",
        };
    }

    // With several conditions or replications the session is shared: minutes of one average do not compare with it.
    private static bool OneAcquisition(Assessment assessment) => assessment.Study.Protocol is { Conditions: 1, Replications: 1 };

    private static void Table(StringBuilder text, RegionAnswer answer)
    {
        text.Append($"{"",-8}{"measure",-MeasureWidth}{"trials",9}{"5 to 95 %",20}{"minutes",9}{"peak",10} session\n");
        foreach (ModalityAnswer a in answer.Answers)
        {
            string measure = a.Modality == Modality.Both ? "both" : a.Verdict.Measure;
            if (measure == Names.RealisticFilter)
            {
                measure = "realistic";                          // the name in full would take a column of its own
            }

            if (measure.Length > MeasureWidth)
            {
                measure = measure[..(MeasureWidth - 3)] + "...";
            }

            string peak = a.Row?.Peak is { } p ? $"{Say.Two(p.Value)} {Say.Unit(p.Unit)}" : "-";
            // `under 0.1` would fill its column and run into the next.
            string minutes = a.Minutes is { } m && a.HasCount ? m < 0.1 ? "< 0.1" : Say.Minutes(m) : "-";
            string middle = a.HasCount ? $"{Say.Trials(a.Trials),9}{Spread(a),20}" : $"{a.NoCount,29}";
            string session = a.Outcome switch { Outcome.Fits => "fits", Outcome.TooLong => "too long", Outcome.NoSession or Outcome.DoesNotApply => "-", _ => "no" };
            text.Append($"{Names.Of(a.Modality),-8}{measure,-MeasureWidth}{middle}{minutes,9}{peak,10} {session}\n");
        }

        // A lone dipole in one direction has no spread to explain.
        if (answer.Answers.FirstOrDefault(a => a.Range().Length > 0) is { } spread)
        {
            text.Append(WhyText.Wrap($"trials: median and 5 to 95 % over {Say.Spread(spread.Verdict)}, not over unknowns", 0));
        }
    }

    private static string Spread(ModalityAnswer a)
    {
        if (a.Target?.Trials is not { P05: { } low, P95: var high } || low == high)
        {
            return "-";
        }

        string from = Say.Count(low), to = high is { } h && h <= Say.MostTrials ? Say.Count(h) : "beyond";
        return from.Length + to.Length <= 15 ? $"{from} to {to}" : $"{from}-{to}";
    }

    private static void Facts(StringBuilder text, Assessment assessment, RegionAnswer answer)
    {
        ModalityAnswer[] single = [.. answer.Answers.Where(a => a.Modality != Modality.Both && a.Target?.SmallestMoment is not null)];
        if (assessment.SessionTrials is not null && single.Length > 0)
        {
            string[] smallest = [.. single.Select(a =>
            {
                string amplitude = a.Target!.SmallestAmplitude is { } v && a.Row?.Peak is { } peak ? $" ({Say.Two(v)} {Say.Unit(peak.Unit)})" : "";
                return $"{Names.Of(a.Modality)} {Say.Two(Si.ToNanoAmpereMetres(a.Target.SmallestMoment!.Value))} nAm{amplitude}";
            })];
            string inOne = string.Join("   ", smallest);
            if (NameWidth + inOne.Length <= 79)
            {
                smallest = [inOne];
            }

            for (int k = 0; k < smallest.Length; k++)
            {
                text.Append(Fact(k == 0 ? "smallest source in the session" : "", smallest[k]));
            }

            foreach (ModalityAnswer a in single.Where(a => a.Outcome is Outcome.TooLong or Outcome.OutOfReach))
            {
                text.Append(Fact($"{Names.Of(a.Modality)} would fit", $"from {Say.Two(Si.ToNanoAmpereMetres(a.Target!.SmallestMoment!.Value))} nAm"));
            }
        }

        foreach (ModalityAnswer a in answer.Answers.Where(a => a.Row?.AtLeak is not null))
        {
            LeakResult leak = a.Row!.AtLeak!;
            string count = leak.Targets.FirstOrDefault(t => t.Rule == a.Verdict.Rule)?.Trials.P50 is { } n && n <= Say.MostTrials ? Say.Plural(n, "trial") : Say.OutOfReach;
            text.Append(Fact($"{Names.Of(a.Modality)} at the published leak", $"{Say.Stated(leak.Leak)} of the strongest direction: {count}"));
        }

        Chair(text, assessment, answer);
        Protocol(text, assessment, answer);
        ModalityAnswer[] missed = [.. answer.Answers.Where(a => a.Verdict.Missing is not null)];
        if (missed.Length > 0)
        {
            text.Append(Fact("chance to miss it", string.Join(", ", missed.Select(a => $"{Names.Of(a.Modality)} {Say.Chance(a.Verdict.Missing!.Value)}"))));
        }

        Attribution(text, answer);
        double?[] sure = [.. answer.Answers.Select(a => a.Verdict.Assurance)];
        text.Append(Fact("how sure", sure.Any(s => s is not null)
            ? string.Join(", ", answer.Answers.Where(a => a.Verdict.Assurance is not null).Select(a => $"{Names.Of(a.Modality)} {Say.Assurance(a.Verdict.Assurance!.Value)}"))
            : "not asked: the study states no unknowns"));
        if (answer.Region.Unknowns is { } unknowns)
        {
            foreach (VerdictSpread spread in unknowns.Verdicts.Where(v => v.Rule == answer.Rule && v.Modality != Modality.Both))
            {
                string most = spread.Ranking is [var effect, ..] && effect.LogVariance > 0 ? $"; most by {UnknownWords.Name(effect.Unknown)}" : "";
                text.Append(Fact($"{Names.Of(spread.Modality)} over the unknowns", $"{UnknownWords.Trials(spread.Trials.P05, spread.Trials.P95)} trials{most}"));
            }

            if (unknowns.First.FirstOrDefault(f => f.Rule == answer.Rule) is { Flip.Length: > 0 } first)
            {
                text.Append(WhyText.Wrap(first.Flip + ".", 0));
            }
        }
    }

    private static void Attribution(StringBuilder text, RegionAnswer answer)
    {
        if (answer.Region.Competitors is { } competitors)
        {
            text.Append(Fact("with others active", AttributionWords.Sources(competitors)));
            foreach (CompetitorReading reading in competitors.Readings.Where(r => r.IsVerdict && r.Modality != Modality.Both))
            {
                CompetitorCount? count = reading.Counts.FirstOrDefault(c => c.Rule == answer.Rule);
                string trials = count is null ? "" : $"{Say.Trials(count.Trials.P50)} trials for {Say.Trials(count.Without)}, ";
                text.Append(Fact($"  {Names.Of(reading.Modality)}", $"{trials}{(reading.PowerLeftDb.P50 is { } db ? $"{Say.SignedDecibels(db)} dB" : "nothing left")}"));
            }
        }

        if (answer.Region.Location is { Bounds: { Count: > 0 } bounds })
        {
            text.Append(Fact("location error in the session", string.Join(", ", bounds.Where(b => b.Modality != Modality.Both || bounds.Count == 1).Select(b => $"{Names.Of(b.Modality)} {AttributionWords.Error(b)}"))));
        }

        if (answer.Region.Electrodes is { } chosen && AttributionWords.Milestones(chosen, answer.Rule) is { Count: > 0 } milestones)
        {
            text.Append(Fact("trials by electrodes chosen", string.Join(", ", milestones.Select(m => $"{m.Electrodes}: {Say.Trials(m.Trials)}"))));
            text.Append(Fact("best two electrodes", $"{chosen.Derivations[0].Name}, {Say.Trials(AttributionWords.Trials(chosen.Derivations[0].Trials, answer.Rule))} trials"));
        }
    }

    // What the session's recording takes in the chair: a plan needs it beside the minutes of one average.
    private static void Chair(StringBuilder text, Assessment assessment, RegionAnswer answer)
    {
        if (assessment.Study.Protocol is not { } p || (p.Conditions * p.Replications == 1 && p.Breaks is null && p.Preparation is null))
        {
            return;
        }

        string[] chairs = [.. answer.Answers.Where(a => a.HasCount && a.Target?.ChairMinutes?.P50 is not null).Select(a => $"{Names.Of(a.Modality)} {Say.Minutes(a.Target!.ChairMinutes!.P50!.Value)} min")];
        if (chairs.Length > 0)
        {
            text.Append(Fact("in the chair, all told", string.Join("   ", chairs)));
        }
    }

    // People, planned analyses and rate, a line a modality.
    private static void Protocol(StringBuilder text, Assessment assessment, RegionAnswer answer)
    {
        ModalityAnswer[] single = [.. answer.Answers.Where(a => a.Modality != Modality.Both)];
        foreach (ModalityAnswer a in single.Where(a => a.Verdict.People?.AtSession is not null))
        {
            PeopleChoice people = assessment.Study.Protocol!.People!;
            text.Append(Fact($"{Names.Of(a.Modality)} {ProtocolWords.Counted(people)}", ProtocolWords.Session(people, a.Verdict.People!)));
        }

        ModalityAnswer[] reached = [.. single.Where(a => a.Verdict.People?.PowerOfStated is not null)];
        if (reached.Length > 0 && assessment.Study.Protocol?.People is { Participants: { } stated } choice)
        {
            text.Append(Fact($"power of {Say.Count(stated)} {ProtocolWords.Counted(choice)}", string.Join(", ", reached.Select(a => $"{Names.Of(a.Modality)} {Say.Chance(a.Verdict.People!.PowerOfStated!.Value)}"))));
        }

        foreach (VerdictResult verdict in answer.Region.Verdicts.Where(v => v.Modality != Modality.Both && v.Stopping is not null))
        {
            text.Append(Fact($"{Names.Of(verdict.Modality)} trials in {verdict.Stopping!.Rows.Count} analyses", ProtocolWords.Planned(verdict.Stopping)));
        }

        foreach (ModalityAnswer a in single.Where(a => a.Verdict.Rate is not null))
        {
            text.Append(Fact($"{Names.Of(a.Modality)} at the best rate", ProtocolWords.Rate(a.Verdict.Rate!)));
        }
    }

    private static string Fact(string name, string words) =>
        NameWidth + words.Length <= 79 ? $"{name,-NameWidth}{words}\n" : $"{name}\n{WhyText.Wrap(words, 4)}";

    private static void Others(StringBuilder text, Assessment assessment, ResponseResult response, RegionAnswer first)
    {
        RegionResult[] others = [.. response.Regions.Skip(1)];
        foreach (RegionResult region in others.Take(MostRegions))
        {
            RegionAnswer answer = new(assessment, response.Response, region, first.Rule);
            text.Append(WhyText.Wrap($"{region.Region}: {Compared(first, answer)}", 0));
        }

        if (others.Length > MostRegions)
        {
            text.Append($"{others.Length - MostRegions} more regions in regions.csv.\n");
        }
    }

    // `within 2 %` where every verdict is the same and the counts are close, else each verdict.
    private static string Compared(RegionAnswer first, RegionAnswer other)
    {
        bool same = first.Answers.Count == other.Answers.Count && first.Answers.Zip(other.Answers).All(p => p.First.Outcome == p.Second.Outcome && p.First.HasCount);
        double apart = same ? first.Answers.Zip(other.Answers).Max(p => Math.Abs(p.Second.Trials!.Value - p.First.Trials!.Value) / (double)p.First.Trials.Value) : double.PositiveInfinity;
        return apart <= 0.05
            ? $"within {Math.Max(1, (int)Math.Ceiling(100 * apart - 1e-9))} %"
            : string.Join("; ", other.Answers.Select(a => $"{Names.Of(a.Modality)} {a.Line()}"));
    }

    /// <summary>Colour for marks, where it is allowed.</summary>
    internal sealed record Ink(bool Colour)
    {
        /// <summary>The sign before warnings.</summary>
        public string Alert => Paint("!", 31);

        /// <summary>The mark of a modality.</summary>
        public string Mark(Modality modality) => modality switch { Modality.Eeg => Paint("o", 33), Modality.Meg => Paint("*", 36), _ => Paint("#", 35) };

        private string Paint(string sign, int code) => Colour ? $"\u001b[{code}m{sign}\u001b[0m" : sign;
    }
}
