using System.Globalization;
using System.Text;

using CsCheck;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Tables;

namespace DeepSourceCheck.Tests.Files.Tables;

/// <summary>The fast reader of points against the reader of every table: the same points, or it stands aside.</summary>
public sealed class CleanPointsTests
{
    // Names, numbers and line ends, sound ones and all that could make the two readers differ.
    private static readonly Gen<string> Names = Gen.OneOf(
        Gen.Int[0, 40].Select(k => $"p{k}"),
        Any("a", "a b", "Ünder", "", " a", "a ", "#1", "\"q\"", "n/a", "a\u0007", "a\u007f", "left-thalamus-of-some-length", "a\u2028b"));

    private static readonly Gen<string> Numbers = Gen.OneOf(
        Gen.Double[-120, 120].Select(v => v.ToString("F4", CultureInfo.InvariantCulture)),
        Gen.Double[-1e4, 1e4].Select(v => v.ToString("R", CultureInfo.InvariantCulture)),
        Any("0", "-0", "1e1", "+3", ".5", "5.", "1e400", "NaN", "", " 7", "7 ", "1,5", "10000", "10000.1", "-10000", "0x10", "12345678901234567890", "1.2345678901234567", "٣"));

    private static readonly Gen<string> Ends = Gen.Frequency((20, Gen.Const("\n")), (6, Gen.Const("\r\n")), (1, Any("\r", "\n\n", "\n \n", "\f", "\u0085", "\t\n", "\0\n")));

    private static readonly Gen<string> Headers = Gen.Frequency(
        (8, Any("name\tx\ty\tz", "z\tname\ty\tx", " name\tx\ty\tz ")),
        (1, Any("\ufeffname\tx\ty\tz", "name\tx\ty\tz\tz", "name\tx\ty", "name x y z", "Name\tx\ty\tz", "\nname\tx\ty\tz", "name\tx\ty\tz\t\u00e4")));

    private static readonly Gen<string> Tables =
        from header in Headers
        from first in Ends
        from rows in Gen.Select(Names, Numbers, Numbers, Numbers, Ends).Array[0, 6]
        select header + first + string.Concat(rows.Select(r => header.StartsWith('z') ? $"{r.Item2}\t{r.Item1}\t{r.Item3}\t{r.Item4}{r.Item5}" : $"{r.Item1}\t{r.Item2}\t{r.Item3}\t{r.Item4}{r.Item5}"));

    [Fact]
    public void FastReader_WhereItAccepts_GivesWhatTheCarefulOneGives()
    {
        int accepted = 0;
        Tables.Sample(text =>
        {
            byte[] bytes = Encoding.UTF8.GetBytes(text);
            if (CleanPoints.TryRead(bytes, out PointNames names, out Vec3[] positions))
            {
                Interlocked.Increment(ref accepted);
                PointsTable careful = PointsTable.Careful(bytes, "t.tsv");
                Assert.Equal(careful.Points.Select(p => p.Name), names);
                Assert.Equal(careful.Points.Select(p => Bits(p.Position)), positions.Select(Bits));
                Assert.Equal(careful.Points.Select(p => p.Line), Enumerable.Range(2, names.Length));
                Assert.Empty(careful.Warnings);
            }
        }, iter: 20_000);
        Assert.True(accepted > 300, $"only {accepted} of the tables were accepted");
    }

    [Theory]
    [InlineData("\n", 4, true)]
    [InlineData("\r\n", 4, false)]
    [InlineData("\n", 5, false)]
    public void ManyRows_CutIntoPieces_AreThoseOfTheCarefulReader(string end, int columns, bool lastEnds)
    {
        byte[] bytes = Encoding.UTF8.GetBytes(Many(end, columns, lastEnds));
        Assert.True(CleanPoints.TryRead(bytes, out PointNames names, out Vec3[] positions));
        PointsTable careful = PointsTable.Careful(bytes, "t.tsv");
        Assert.Equal(Rows, names.Length);
        Assert.Equal(careful.Names, names);
        Assert.Equal(careful.Positions, positions);
    }

    [Fact]
    public void RepeatedName_InALongTable_IsReportedWithBothLines()
    {
        string text = Many("\n", 4, true) + "p12\t1\t2\t3\n";
        Assert.False(CleanPoints.TryRead(Encoding.UTF8.GetBytes(text), out _, out _));
        string folder = Directory.CreateTempSubdirectory("points-").FullName;
        try
        {
            string path = Path.Combine(folder, "t.tsv");
            File.WriteAllText(path, text);
            InputException error = Assert.Throws<InputException>(() => PointsTable.Read(path, "t.tsv"));
            Assert.StartsWith($"t.tsv:{Rows + 2}: name: the name 'p12' stands already in line 14", Assert.Single(error.Problems).ToString(), StringComparison.Ordinal);
        }
        finally
        {
            Directory.Delete(folder, recursive: true);
        }
    }

    [Fact]
    public void Names_AreSlices_AndAnySelectionKeepsThem()
    {
        PointNames slices = PointNames.Slices(Encoding.UTF8.GetBytes("abcdef"), [0, 1, 3], [1, 2, 3]), texts = ["a", "bc", "def"];
        Assert.Equal(texts, slices);
        Assert.Equal(["def", "a"], slices.At([2, 0]));
        Assert.Equal(["def", "a"], texts.At([2, 0]));
        Assert.Throws<ArgumentException>(() => PointNames.Slices([], [0], []));
    }

    private const int Rows = 60_000;

    private static Gen<string> Any(params string[] texts) => Gen.Int[0, texts.Length - 1].Select(k => texts[k]);

    private static (long X, long Y, long Z) Bits(Vec3 p) => (BitConverter.DoubleToInt64Bits(p.X), BitConverter.DoubleToInt64Bits(p.Y), BitConverter.DoubleToInt64Bits(p.Z));

    private static string Many(string end, int columns, bool lastEnds)
    {
        var text = new StringBuilder("name\tx\ty\tz" + (columns > 4 ? "\tremark" : "") + end);
        var random = new Random(7);
        for (int k = 0; k < Rows; k++)
        {
            text.Append(CultureInfo.InvariantCulture, $"p{k}\t{random.Next(-900_000, 900_000) / 1e4}\t{100 * random.NextDouble()}\t{random.Next(-80, 80)}{(columns > 4 ? "\tr" : "")}{(k < Rows - 1 || lastEnds ? end : "")}");
        }

        return text.ToString();
    }
}
