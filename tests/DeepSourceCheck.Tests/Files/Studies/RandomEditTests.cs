using System.Text;

using CsCheck;

using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Studies;

namespace DeepSourceCheck.Tests.Files.Studies;

/// <summary>Whatever a file holds, the reader either reads it or says what is wrong. A failure prints the seed that repeats it.</summary>
public class RandomEditTests
{
    private const int Edits = 3000;

    private static readonly string[] Bases = [DefaultStudy.Text, ExampleStudy.Text, StudyText.Small, StudyText.Tables, StudyText.Imported];

    private static readonly string[] Pieces =
    [
        "", " ", "\n", "\t", ":", ": ", "- ", "[", "]", "{", "}", ",", "#", "'", "\"", "|", ">", "&a ", "*a", "!", "!!str ", "<<: ", "---\n", "...\n", "%", "@", "`", "?", "~", "null", "true",
        ".nan", "-.inf", "1e308", "1e-320", "0", "-1", "1_0", "0x1", "[]", "{}", "[[]]", "\\", "\"\\x00\"", "\"\\uD83D\"", "é", "😀", "\uFEFF", "\u0085", "\u2028", "name: ", "adult-4", "\r", "\0", "\ud800",
    ];

    [Fact]
    public void RandomEdits_NeverEndOtherwiseThanReadOrRefused() =>
        Gen.Select(Gen.OneOf(Bases), Gen.Select(Gen.Int[0, 100_000], Gen.Int[0, 12], Gen.OneOf(Pieces)).Array[1, 6])
            .Sample(edit => ReadsOrRefuses(Edit(edit.Item1, edit.Item2)), iter: Edits, threads: 1);

    [Fact]
    public void RandomBytes_NeverEndOtherwiseThanReadOrRefused() =>
        Gen.Select(Gen.OneOf(Bases), Gen.Select(Gen.Int[0, 100_000], Gen.Byte).Array[1, 20])
            .Sample(
                flip =>
                {
                    byte[] bytes = Encoding.UTF8.GetBytes(flip.Item1);
                    foreach ((int at, byte value) in flip.Item2)
                    {
                        bytes[at % bytes.Length] = value;
                    }

                    return Refusable(() => StudyReader.ReadText(StudyFile.Decode(bytes, "f.yaml"), "f.yaml", StudyText.Folder, Purpose.Assess, StudyText.Library));
                },
                iter: Edits,
                threads: 1);

    [Fact]
    public void SwappedLines_NeverEndOtherwiseThanReadOrRefused() =>
        Gen.Select(Gen.OneOf(Bases), Gen.Select(Gen.Int[0, 1000], Gen.Int[0, 1000]).Array[1, 4])
            .Sample(
                swap =>
                {
                    string[] lines = swap.Item1.Split('\n');
                    foreach ((int a, int b) in swap.Item2)
                    {
                        (lines[a % lines.Length], lines[b % lines.Length]) = (lines[b % lines.Length], lines[a % lines.Length]);
                    }

                    return ReadsOrRefuses(string.Join('\n', lines));
                },
                iter: Edits,
                threads: 1);

    private static string Edit(string text, (int At, int Length, string Piece)[] edits)
    {
        foreach ((int at, int length, string piece) in edits)
        {
            int start = at % (text.Length + 1);
            text = text[..start] + piece + text[Math.Min(text.Length, start + length)..];
        }

        return text;
    }

    private static bool ReadsOrRefuses(string text) => Refusable(() => StudyText.Read(text));

    private static bool Refusable(Func<StudyReading> read)
    {
        try
        {
            return read().Text.Length > 0;
        }
        catch (InputException e)
        {
            return e.Problems.Count is >= 1 and <= 51 && e.Problems.All(p => p.Message.Length is > 0 and < 3000 && !p.Message.Contains('\n', StringComparison.Ordinal));
        }
    }
}
