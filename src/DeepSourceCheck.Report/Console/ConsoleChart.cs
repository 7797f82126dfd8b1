using System.Text;

using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Report.Answers;
using DeepSourceCheck.Report.Figures;

namespace DeepSourceCheck.Report.Console;

/// <summary>The strip of trials in letters: one row a modality on a common logarithmic axis.</summary>
internal static class ConsoleChart
{
    private const int Start = 12;
    private const int Columns = 64;

    public static string Of(Assessment assessment, RegionAnswer answer, ConsoleSummary.Ink ink)
    {
        IEnumerable<double> counts = answer.Answers.Where(a => a.HasCount).SelectMany(a => new double?[] { a.Target?.Trials.P05, a.Trials, a.Target?.Trials.P95 }).OfType<double>();
        LogAxis axis = new(counts.Append(assessment.SessionTrials ?? double.NaN).Where(c => c <= Say.MostTrials * 10.0));
        int? session = assessment.SessionTrials is { } s and > 0 ? Column(axis, s) : null;
        StringBuilder text = new();
        if (session is { } at)
        {
            const string Word = "session";
            int left = Math.Clamp(Start + at - Word.Length + 1, 0, Start + Columns - Word.Length);
            text.Append(' ', left).Append(Word).Append('\n');
        }

        foreach (ModalityAnswer a in answer.Answers)
        {
            text.Append(Row(axis, a, session, ink)).Append('\n');
        }

        return text.Append(Labels(axis)).Append('\n').ToString();
    }

    private static int Column(LogAxis axis, double trials) =>
        (int)Math.Clamp(Math.Round((Math.Log10(trials) - axis.Low) / (axis.High - axis.Low) * (Columns - 1)), 0, Columns - 1);

    private static string Row(LogAxis axis, ModalityAnswer a, int? session, ConsoleSummary.Ink ink)
    {
        char[] track = new string(' ', Columns).ToCharArray();
        foreach (int e in axis.Decades)
        {
            track[Column(axis, Math.Pow(10, e))] = '.';
        }

        if (session is { } at)
        {
            track[at] = '|';
        }

        int mark = -1;
        if (a is { HasCount: true, Trials: { } trials })
        {
            mark = Column(axis, trials);
            int low = a.Target?.Trials.P05 is { } l ? Column(axis, l) : mark;
            int high = a.Target?.Trials.P95 is { } h ? Column(axis, h) : Columns - 1;
            Array.Fill(track, '=', low, high - low + 1);
            // The plumb line stays visible through the bar.
            if (session is { } plumb && plumb != mark)
            {
                track[plumb] = '|';
            }
        }
        else
        {
            string words = a.Outcome == Outcome.Silent ? "silent" : a.Outcome == Outcome.DoesNotApply ? a.NoCount : Say.OutOfReach + " >";
            words.CopyTo(0, track, Columns - words.Length, words.Length);
        }

        string label = Names.Of(a.Modality).PadRight(Start);
        return mark < 0 ? label + new string(track).TrimEnd() : label + new string(track, 0, mark) + ink.Mark(a.Modality) + new string(track, mark + 1, Columns - mark - 1).TrimEnd();
    }

    private static string Labels(LogAxis axis)
    {
        char[] line = "trials".PadRight(Start + Columns + 3).ToCharArray();
        int free = "trials".Length + 1;
        foreach (int e in axis.Decades)
        {
            string label = LogAxis.Label(e);
            int left = Math.Min(Start + Column(axis, Math.Pow(10, e)) - label.Length / 2, line.Length - label.Length);
            if (left >= free)
            {
                label.CopyTo(0, line, left, label.Length);
                free = left + label.Length + 1;
            }
        }

        return new string(line).TrimEnd();
    }
}
