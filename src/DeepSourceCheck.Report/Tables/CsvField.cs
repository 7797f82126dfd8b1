using System.Buffers;

namespace DeepSourceCheck.Report.Tables;

/// <summary>Quotes a field of comma-separated values.</summary>
/// <remarks>RFC 4180: fields with commas, quotes or line breaks stand in quotes, a quote inside is doubled.</remarks>
public static class CsvField
{
    private static readonly SearchValues<char> Special = SearchValues.Create(",\"\r\n");

    /// <summary>The field as it stands in the file.</summary>
    public static string Quote(string text) =>
        text.AsSpan().ContainsAny(Special) ? $"\"{text.Replace("\"", "\"\"", StringComparison.Ordinal)}\"" : text;
}
