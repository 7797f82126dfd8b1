using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Report.Answers;

namespace DeepSourceCheck.Report.Html;

/// <summary>Every value that entered: key, value, unit, origin, source, grade.</summary>
internal static class AssumptionSection
{
    public static void Write(Markup html, Assessment assessment)
    {
        HtmlReport.Section(html, "assumptions", "Assumptions");
        html.Element("p",
            "Every value that entered the answer. Origin: stated by the study, or a default of this program. Grade of a default: seen, the number stood in the source that was read; memory, from memory of the named source; derived, computed from stated inputs.",
            "class", "small");
        HtmlReport.Table(html, "Assumptions", ["key", "value", "unit", "origin", "source", "grade"],
            assessment.Assumptions.Select(a => (IReadOnlyList<string>)
                [a.Key, StudyValue.Text(a.Value, '\u2212'), a.Unit, a.FromStudy ? "study" : "default", a.Source, a.Grade is { } g ? Names.Of(g) : ""]),
            ["key-name", "long", "", "", "long", ""]);
        html.CloseLine();
    }
}
