using System.Globalization;
using System.Text.RegularExpressions;

namespace DeepSourceCheck.Files.Studies;

/// <summary>Numbers as study files write them: plain decimals of the YAML 1.2 core schema, finite.</summary>
internal static partial class YamlNumber
{
    /// <summary>The number, or null with the reason why the scalar is none.</summary>
    public static double? Parse(YamlScalar scalar, out string reason)
    {
        reason = "";
        string text = scalar.Text;
        if (!scalar.Plain)
        {
            reason = Decimal().IsMatch(text) ? "it stands in quotes and is text; write it without" : "it is text";
            return null;
        }

        if (!Decimal().IsMatch(text))
        {
            reason = text switch
            {
                _ when NotFinite().IsMatch(text) => "only finite numbers are allowed",
                _ when text.Contains('_') && Decimal().IsMatch(text.Replace("_", "", StringComparison.Ordinal)) =>
                    "digits are not grouped by _; write them together",
                _ when OtherBase().IsMatch(text) => "only decimal numbers are allowed",
                _ when Comma().IsMatch(text) => "the decimal sign is a point, and digits are not grouped by commas",
                _ => "it is not a number",
            };
            return null;
        }

        double value = double.Parse(text, NumberStyles.Float, CultureInfo.InvariantCulture);
        if (!double.IsFinite(value))
        {
            reason = "it is too large";
            return null;
        }

        if (value == 0 && text.AsSpan(0, text.AsSpan().IndexOfAny('e', 'E') is >= 0 and var end ? end : text.Length).ContainsAnyInRange('1', '9'))
        {
            reason = "it is too small";
            return null;
        }

        return value == 0 ? 0 : value;
    }

    [GeneratedRegex(@"^[-+]?(\.[0-9]+|[0-9]+(\.[0-9]*)?)([eE][-+]?[0-9]+)?\z", RegexOptions.CultureInvariant)]
    private static partial Regex Decimal();

    [GeneratedRegex(@"^[-+]?\.?(nan|inf|infinity)\z", RegexOptions.CultureInvariant | RegexOptions.IgnoreCase)]
    private static partial Regex NotFinite();

    [GeneratedRegex(@"^[-+]?0[xXoObB][0-9a-fA-F_]+\z", RegexOptions.CultureInvariant)]
    private static partial Regex OtherBase();

    [GeneratedRegex(@"^[-+]?[0-9]+(,[0-9]+)+(\.[0-9]*)?\z", RegexOptions.CultureInvariant)]
    private static partial Regex Comma();
}
