using System.Collections;
using System.Globalization;

namespace DeepSourceCheck.Report.Answers;

/// <summary>A value of the study as the study file would write it.</summary>
public static class StudyValue
{
    /// <summary>Text, number, `true`, `[a, b]`; `none` for null.</summary>
    /// <param name="value">Text, number, flag or list of them.</param>
    /// <param name="minus">Sign of negative numbers: a hyphen can be pasted into a study, a minus sign reads better.</param>
    public static string Text(object? value, char minus = '-') => value switch
    {
        null => "none",
        string text => text,
        bool flag => flag ? "true" : "false",
        IEnumerable list => $"[{string.Join(", ", list.Cast<object?>().Select(item => Text(item, minus)))}]",
        IFormattable number => number.ToString(null, CultureInfo.InvariantCulture).Replace('-', minus),
        _ => value.ToString() ?? "",
    };
}
