using System.Text;

using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Studies;

/// <summary>Reads the text of a YAML file: UTF-8 with or without byte order mark, limited in size.</summary>
public static class StudyFile
{
    /// <summary>Largest file [bytes].</summary>
    public const int LargestFile = 16 * 1024 * 1024;

    private static readonly UTF8Encoding Strict = new(encoderShouldEmitUTF8Identifier: false, throwOnInvalidBytes: true);

    /// <summary>The text of a file.</summary>
    /// <exception cref="InputException">The file is missing, unreadable, too large or no UTF-8 text.</exception>
    public static string Read(string path)
    {
        if (Directory.Exists(path))
        {
            throw new InputException(path, null, "this is a folder; name the study file in it, for instance study.yaml");
        }

        try
        {
            using FileStream stream = File.OpenRead(path);
            var bytes = new byte[(int)Math.Min(LargestFile + 1L, stream.CanSeek ? stream.Length + 1 : LargestFile + 1L)];
            int count = stream.ReadAtLeast(bytes, bytes.Length, throwOnEndOfStream: false);
            return Decode(bytes.AsSpan(0, count), path);
        }
        catch (Exception e) when (e is FileNotFoundException or DirectoryNotFoundException)
        {
            throw new InputException(path, null, "there is no such file; check the path, or make an example with `deepsourcecheck new FOLDER`");
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException or ArgumentException or NotSupportedException)
        {
            throw new InputException(path, null, "the file cannot be read; check its path and permissions");
        }
    }

    /// <summary>The text of the bytes.</summary>
    /// <exception cref="InputException">Too many bytes, or no UTF-8 text.</exception>
    public static string Decode(ReadOnlySpan<byte> bytes, string file)
    {
        if (bytes.Length > LargestFile)
        {
            throw new InputException(file, null,
                $"the file is larger than {LargestFile / (1024 * 1024)} MB; no study is: put data into tables or arrays and name them");
        }

        if (bytes.StartsWith<byte>([0xFF, 0xFE]) || bytes.StartsWith<byte>([0xFE, 0xFF]) || bytes.StartsWith<byte>([0, 0, 0xFE, 0xFF]))
        {
            throw new InputException([new(file, 1, 1, null, "the text is UTF-16 or UTF-32; save it as UTF-8")]);
        }

        if (bytes.StartsWith<byte>([0xEF, 0xBB, 0xBF]))
        {
            bytes = bytes[3..];
        }

        string text;
        try
        {
            text = Strict.GetString(bytes);
        }
        catch (DecoderFallbackException e)
        {
            int at = Math.Clamp(e.Index, 0, bytes.Length);
            int start = bytes[..at].LastIndexOf((byte)'\n') + 1;
            int column = Encoding.UTF8.GetCharCount(bytes[start..at]) + 1;
            throw new InputException([new(file, bytes[..at].Count((byte)'\n') + 1, column, null, "the bytes here are not UTF-8 text; save the file as UTF-8")]);
        }

        CheckCharacters(text, file);
        return text;
    }

    /// <summary>Refuses the control characters that YAML does not allow.</summary>
    /// <exception cref="InputException">At the first of them.</exception>
    public static void CheckCharacters(string text, string file)
    {
        for (int i = 0; i < text.Length; i++)
        {
            if (text[i] is < ' ' and not ('\t' or '\n' or '\r') or '\u007F')
            {
                ReadOnlySpan<char> before = text.AsSpan(0, i);
                string message = text[i] == '\0'
                    ? "the text holds a zero byte: this is no UTF-8 text file; save it as UTF-8"
                    : $"the text holds the control character U+{(int)text[i]:X4}; remove it";
                throw new InputException([new(file, before.Count('\n') + 1, i - before.LastIndexOf('\n'), null, message)]);
            }
        }
    }
}
