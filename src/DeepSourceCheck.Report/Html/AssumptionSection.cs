using System.Collections;
using System.Globalization;

using DeepSourceCheck.Core.Results;

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
                [a.Key, Value(a.Value), a.Unit, a.FromStudy ? "study" : "default", a.Source, a.Grade is { } g ? Names.Of(g) : ""]),
            ["key-name", "long", "", "", "long", ""]);
        html.CloseLine();
    }

    /// <summary>A value as the study file would write it.</summary>
    internal static string Value(object? value) => value switch
    {
        null => "none",
        string text => text,
        bool flag => flag ? "true" : "false",
        IEnumerable list => $"[{string.Join(", ", list.Cast<object?>().Select(Value))}]",
        IFormattable number => number.ToString(null, CultureInfo.InvariantCulture).Replace('-', '\u2212'),
        _ => value.ToString() ?? "",
    };
}
