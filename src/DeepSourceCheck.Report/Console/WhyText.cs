using System.Globalization;
using System.Text;

using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Report.Answers;

namespace DeepSourceCheck.Report.Console;

/// <summary>What `why` prints: each number from moment to minutes, with formula and source, exact enough to recompute the count.</summary>
public static class WhyText
{
    private const int Width = 79;
    private const int Indent = 8;

    /// <summary>The chains of every verdict of one region.</summary>
    /// <param name="assessment">The run.</param>
    /// <param name="response">The response.</param>
    /// <param name="region">The region.</param>
    /// <param name="unicode">False: ASCII only.</param>
    public static string Of(Assessment assessment, ResponseResult response, RegionResult region, bool unicode)
    {
        StringBuilder text = new();
        text.Append(Wrap($"{assessment.Study.Title}: {response.Response.Name}, {region.Region}", 0));
        text.Append(Wrap($"{Say.Plural(region.Dipoles, "dipole")}. Below stands every number from the moment to the minutes as the run used it, for the dipole whose count is the median "
            + "(so that EEG and MEG may show different dipoles): symbol = value unit, what it is; then, after a further =, its formula in the symbols of earlier lines "
            + "(a space multiplies; ceil rounds up); in square brackets where it comes from. Recomputing the lines gives N exactly.", 0));
        if (assessment.Leadfields?.Details is { } details)
        {
            text.Append(Wrap($"Leadfields: {details}.", 0));
        }

        if (region.Supports is { } supports)
        {
            text.Append(Wrap($"Its dipoles in the finite elements: {supports.Text}.", 0));
        }

        foreach (VerdictResult verdict in region.Verdicts)
        {
            ModalityAnswer answer = new(region, verdict);
            text.Append('\n').Append(Wrap($"{RegionAnswer.Words(verdict.Modality)}: {answer.Reading()}, {Say.RuleKey(verdict.Rule)}, {Say.Direction(verdict.Direction)} direction", 0));
            Steps(text, verdict.Chain);
            text.Append(Wrap(verdict.Chain.Count == 0 ? $"No steps. {verdict.Text}" : verdict.Text, 2));
        }

        Attribution(text, region);
        return Plain(text.ToString(), unicode);
    }

    private static void Attribution(StringBuilder text, RegionResult region)
    {
        foreach (CompetitorReading reading in region.Competitors?.Readings.Where(r => r.IsVerdict) ?? [])
        {
            foreach (CompetitorCount count in reading.Counts.Where(c => c.Chain.Count > 0))
            {
                text.Append('\n').Append(Wrap($"With {AttributionWords.Sources(region.Competitors!)} active, {RegionAnswer.Words(reading.Modality)}: {reading.Measure}, {Say.RuleKey(count.Rule)}; {Say.Trials(count.Without)} trials without", 0));
                Steps(text, count.Chain);
            }
        }

        if (region.Competitors is not null)
        {
            text.Append(Wrap(AttributionWords.Assumed, 2));
        }

        foreach (LocationReading bound in region.Location?.Bounds ?? [])
        {
            text.Append('\n').Append(Wrap($"Location by {RegionAnswer.Words(bound.Modality)}, {Say.Direction(region.Location!.Direction)} direction: {AttributionWords.Error(bound)}", 0));
            Steps(text, bound.Chain);
        }

        if (region.Location is { Bounds.Count: > 0 })
        {
            text.Append(Wrap(AttributionWords.Located, 2));
        }
        else if (region.Location?.Reason is { } reason)
        {
            text.Append('\n').Append(Wrap($"Location: no bound ({reason}).", 0));
        }
    }

    private static void Steps(StringBuilder text, IReadOnlyList<DerivedNumber> chain)
    {
        for (int k = 0; k < chain.Count; k++)
        {
            Step(text, chain[k], k + 1 < chain.Count ? chain[k + 1] : null);
        }
    }

    /// <summary>The number with as many digits as reading it back exactly takes (at most 17).</summary>
    public static string Exact(double value) => (value + 0.0).ToString("R", CultureInfo.InvariantCulture);

    /// <summary>ASCII where the output needs it.</summary>
    internal static string Plain(string text, bool unicode)
    {
        if (unicode)
        {
            return text;
        }

        StringBuilder ascii = new(text.Length);
        foreach (Rune rune in text.EnumerateRunes())
        {
            ascii.Append(rune.Value switch
            {
                < 0x80 => ((char)rune.Value).ToString(),
                0x2212 or 0x2013 or 0x2014 => "-",
                0xD7 => "x",
                0xB5 or 0x3BC => "u",
                0x221A => "sqrt",
                0x2018 or 0x2019 => "'",
                0x201C or 0x201D => "\"",
                0x2026 => "...",
                0xA0 => " ",
                0xB7 => " ",
                0xB2 => "^2",
                _ => "?",
            });
        }

        return ascii.ToString();
    }

    /// <summary>Words in lines of at most 79 signs, with a final line break; later lines of indented text are indented by two more.</summary>
    public static string Wrap(string text, int indent)
    {
        StringBuilder lines = new(), line = new(new string(' ', indent));
        bool empty = true;
        foreach (string word in text.Split(' ', StringSplitOptions.RemoveEmptyEntries))
        {
            if (!empty && line.Length + 1 + word.Length > Width)
            {
                lines.Append(line).Append('\n');
                line.Clear().Append(' ', indent + (indent > 0 ? 2 : 0));
                empty = true;
            }

            line.Append(empty ? "" : " ").Append(word);
            empty = false;
        }

        return lines.Append(line).Append('\n').ToString();
    }

    private static void Step(StringBuilder text, DerivedNumber step, DerivedNumber? next)
    {
        string head = $"  {step.Symbol,-4} = {Exact(step.Value)} {step.Unit}".TrimEnd();
        const int NameColumn = 39;
        if (step.Name.Length == 0)
        {
            text.Append(head).Append('\n');
        }
        else if (head.Length < NameColumn - 1 && NameColumn + step.Name.Length <= Width)
        {
            text.Append(head.PadRight(NameColumn)).Append(step.Name).Append('\n');
        }
        else
        {
            text.Append(head).Append('\n').Append(Wrap(step.Name, Indent));
        }

        // Lines of one origin, such as the three components of a vector, name it once, after the last.
        bool shared = next is not null && next.Formula.Length == 0 && step.Formula.Length == 0 && next.Source == step.Source && next.Grade == step.Grade;
        string grade = step.Grade is { } g ? $"; {Names.Of(g)}" : "";
        string source = step.Source.Length > 0 && !shared ? $"[{step.Source}{grade}]" : "";
        if (step.Formula.Length > 0)
        {
            string formula = $"{new string(' ', Indent)}= {step.Formula}";
            if (source.Length > 0 && formula.Length + 3 + source.Length <= Width)
            {
                text.Append($"{formula}   {source}\n");
                return;
            }

            text.Append(Wrap($"= {step.Formula}", Indent));
        }

        if (source.Length > 0)
        {
            text.Append(Wrap(source, Indent));
        }
    }
}
