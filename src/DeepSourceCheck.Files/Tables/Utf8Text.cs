using System.Text;

using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Tables;

/// <summary>Text files are UTF-8, with or without byte order mark; anything else is refused with its place.</summary>
internal static class Utf8Text
{
    private static readonly UTF8Encoding Strict = new(encoderShouldEmitUTF8Identifier: false, throwOnInvalidBytes: true);

    /// <summary>The text without byte order mark.</summary>
    /// <exception cref="InputException">Bytes that are not UTF-8, or a text with NUL characters; names the line.</exception>
    public static string Decode(byte[] bytes, string displayName)
    {
        ReadOnlySpan<byte> content = bytes;
        if (content.StartsWith("\ufeff"u8))
        {
            content = content[3..];
        }

        int nul = content.IndexOf((byte)0);
        if (nul >= 0)
        {
            bool wide = content.Length > 1 && (content[0] is 0xff or 0xfe || content[0] == 0 || content[1] == 0);
            throw Fault(displayName, content[..nul], wide ? "the text is not UTF-8 (UTF-16 or UTF-32?); save it as UTF-8" : "the file holds a NUL character: it is damaged or no text file");
        }

        try
        {
            return Strict.GetString(content);
        }
        catch (DecoderFallbackException error)
        {
            int at = Math.Clamp(error.Index, 0, content.Length);
            throw Fault(displayName, content[..at], "the text is not UTF-8; save it as UTF-8");
        }
    }

    private static InputException Fault(string displayName, ReadOnlySpan<byte> before, string message) =>
        new([new InputProblem(displayName, before.Count((byte)'\n') + 1, 0, null, message)]);
}
