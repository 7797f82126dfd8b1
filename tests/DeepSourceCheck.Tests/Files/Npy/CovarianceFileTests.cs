using System.Globalization;

using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Npy;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Files.Npy;

public sealed class CovarianceFileTests
{
    // V^2 and T^2 are tiny: every check must be relative.
    private const double Tiny = 4e-28;

    private static readonly double[] Good = [2 * Tiny, -Tiny, -Tiny, 2 * Tiny];

    [Theory]
    [InlineData(",", "\n")]
    [InlineData("\t", "\r\n")]
    [InlineData("; ", "\n\n")]
    public void TextAndArray_GiveTheSameMatrix(string separator, string newLine)
    {
        string text = string.Join(newLine, Good.Chunk(2).Select(r => string.Join(separator, r.Select(v => v.ToString("R", CultureInfo.InvariantCulture))))) + newLine;
        using ScratchFolder folder = new();
        Assert.Equal(Good, CovarianceFile.Read(folder.Write("c.csv", text), "c.csv", 2));
        NpyWriter.Write(folder.At("c.npy"), [2, 2], Good);
        Assert.Equal(Good, CovarianceFile.Read(folder.At("c.npy"), "c.npy", 2));
    }

    [Fact]
    public void AverageReferencedMatrix_WhichIsSingular_IsAccepted()
    {
        // I - 11'/n scaled, kept in single precision: rank n - 1, eigenvalue 0 up to rounding.
        const int N = 64;
        double[] matrix = [.. Enumerable.Range(0, N * N).Select(k => (double)(float)(Tiny * 1e20 * ((k / N == k % N ? 1 : 0) - 1.0 / N)))];
        Assert.Equal(matrix, Read(matrix, N));
    }

    [Fact]
    public void RoundingAsymmetry_IsAveragedAway()
    {
        double[] matrix = Read([2 * Tiny, Tiny, Tiny * (1 + 1e-9), 2 * Tiny], 2);
        Assert.Equal(matrix[1], matrix[2]);
    }

    [Theory]
    [InlineData("rows 1 and 3", new double[] { 1, 0, 0.5, 0, 1, 0, 0.50001, 0, 1 })]
    [InlineData("variance of row 2", new double[] { 1, 0, 0, 0, 0, 0, 0, 0, 1 })]
    [InlineData("variance of row 3", new double[] { 1, 0, 0, 0, 1, 0, 0, 0, -1 })]
    [InlineData("negative variance", new double[] { 1, 2, 0, 2, 1, 0, 0, 0, 1 })]
    [InlineData("rows 1 to 3", new double[] { 1, 0.9, -0.9, 0.9, 1, 0.9, -0.9, 0.9, 1 })]
    [InlineData("[1, 2]", new double[] { 1, 0, 0, 0, 1, double.NaN, 0, 0, 1 })]
    public void FaultyMatrix_IsRefusedWithThePlace(string place, double[] matrix)
    {
        double[] scaled = [.. matrix.Select(v => v * Tiny)];
        InputException error = Assert.Throws<InputException>(() => Read(scaled, 3));
        Assert.Contains(place, error.Message, StringComparison.Ordinal);
        Assert.StartsWith("c.npy", error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void RowOfZeros_IsKeptOnlyWhereAReferenceMayStand()
    {
        double[] referenced = [0, 0, 0, 0, 2 * Tiny, Tiny, 0, Tiny, 2 * Tiny];
        using ScratchFolder folder = new();
        NpyWriter.Write(folder.At("c.npy"), [3, 3], referenced);
        Assert.Equal(referenced, CovarianceFile.Read(folder.At("c.npy"), "c.npy", 3, mayHoldReference: true));
        Assert.Contains("variance of row 1", Assert.Throws<InputException>(() => CovarianceFile.Read(folder.At("c.npy"), "c.npy", 3)).Message, StringComparison.Ordinal);

        NpyWriter.Write(folder.At("z.npy"), [2, 2], new double[4]);
        Assert.Contains("every variance is 0", Assert.Throws<InputException>(() => CovarianceFile.Read(folder.At("z.npy"), "z.npy", 2, mayHoldReference: true)).Message, StringComparison.Ordinal);
        NpyWriter.Write(folder.At("half.npy"), [2, 2], [0, Tiny, Tiny, 2 * Tiny]);
        Assert.Contains("variance of row 1", Assert.Throws<InputException>(() => CovarianceFile.Read(folder.At("half.npy"), "half.npy", 2, mayHoldReference: true)).Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("1,0\n0,1\n", 3, "3")]
    [InlineData("1,0\n0\n", 2, "c.csv:2")]
    [InlineData("1,0\n", 2, "1 rows")]
    [InlineData("1,0\n0,1\n0,1\n", 2, "3 rows")]
    [InlineData("a,b\n1,0\n0,1\n", 2, "without header")]
    [InlineData("1,0\n0,inf\n", 2, "column 2")]
    [InlineData("1,0\n0,\n", 2, "column 2")]
    public void FaultyText_IsRefusedWithThePlace(string text, int rows, string place)
    {
        using ScratchFolder folder = new();
        string path = folder.Write("c.csv", text);
        Assert.Contains(place, Assert.Throws<InputException>(() => CovarianceFile.Read(path, "c.csv", rows)).Message, StringComparison.Ordinal);
    }

    [Fact]
    public void ArrayOfOtherShape_IsRefusedWithBothSizes()
    {
        using ScratchFolder folder = new();
        NpyWriter.Write(folder.At("c.npy"), [4], Good);
        string message = Assert.Throws<InputException>(() => CovarianceFile.Read(folder.At("c.npy"), "c.npy", 2)).Message;
        Assert.Contains("2 x 2", message, StringComparison.Ordinal);
    }

    private static double[] Read(double[] matrix, int rows)
    {
        using ScratchFolder folder = new();
        NpyWriter.Write(folder.At("c.npy"), [rows, rows], matrix);
        return CovarianceFile.Read(folder.At("c.npy"), "c.npy", rows);
    }
}
