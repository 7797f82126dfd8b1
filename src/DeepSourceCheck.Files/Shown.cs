using System.Globalization;
using System.Text;

namespace DeepSourceCheck.Files;

/// <summary>Text from a file as a message may show it: on one line, short, without control characters.</summary>
internal static class Shown
{
    private const int Longest = 60;

    /// <summary>The text, shortened, control and invisible characters replaced by `?`.</summary>
    public static string Text(string text, int longest = Longest)
    {
        int end = text.Length <= longest ? text.Length : char.IsHighSurrogate(text[longest - 1]) ? longest - 1 : longest;
        var shown = new StringBuilder(end + 3);
        foreach (char c in text.AsSpan(0, end))
        {
            shown.Append(IsHidden(c) ? '?' : c);
        }

        return end < text.Length ? shown.Append("...").ToString() : shown.ToString();
    }

    /// <summary>The text in quotes, shortened.</summary>
    public static string Quoted(string text) => $"'{Text(text)}'";

    /// <summary>Control and invisible characters, which no name or path may hold.</summary>
    public static bool IsHidden(char c) =>
        char.GetUnicodeCategory(c) is UnicodeCategory.Control or UnicodeCategory.Format
            or UnicodeCategory.LineSeparator or UnicodeCategory.ParagraphSeparator;
}
