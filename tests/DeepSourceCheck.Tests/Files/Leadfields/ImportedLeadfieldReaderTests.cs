using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Imported;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Leadfields;
using DeepSourceCheck.Files.Npy;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Files.Leadfields;

public sealed class ImportedLeadfieldReaderTests
{
    private const string Points = "name\tx\ty\tz\np\t10\t0\t0\nq\t20\t0\t0\n";
    private const string Rows = "row\tmodality\tkind\tunit\nE1\tEEG\telectrode\tV/(A m)\nE2\tEEG\telectrode\tV/(A m)\nE3\tEEG\telectrode\tV/(A m)\nM1\tMEG\tmagnetometer\tT\n";

    private static readonly double[] Eeg = [.. Enumerable.Range(1, 18).Select(n => (double)n)];
    private static readonly double[] Meg = [.. Enumerable.Range(1, 6).Select(n => n * 1e-6)];

    [Theory]
    [InlineData(false)]
    [InlineData(true)]
    public void BothShapes_GiveTheSameLeadfield(bool flat)
    {
        using ScratchFolder folder = new();
        (ImportedLeadfield leadfield, IReadOnlyList<string> warnings) = Read(folder, Eeg, flat ? [3, 6] : [3, 2, 3], Meg, flat ? [1, 6] : [1, 2, 3]);
        Assert.Empty(warnings);
        Assert.Equal(["E1", "E2", "E3"], leadfield.EegChannels.Select(r => r.Name));
        Assert.Equal(["p", "q"], leadfield.Points.Select(p => p.Name));
        LeadfieldBlock block = new(3, 1);
        block.Load([leadfield.Points[1].Position], [leadfield.IndexOf("q")]);
        leadfield.Fill(block);
        Assert.Equal([10, 11, 12], [.. Enumerable.Range(0, 3).Select(axis => block.Eeg[LeadfieldBlock.At(1, axis)])]);
        Assert.Equal(Meg[3..], Enumerable.Range(0, 3).Select(axis => block.Meg[LeadfieldBlock.At(0, axis)]));
    }

    [Fact]
    public void OneModalityAlone_IsComplete()
    {
        using ScratchFolder folder = new();
        (ImportedLeadfield leadfield, _) = Read(folder, null, [], Meg, [1, 2, 3]);
        Assert.Equal(0, leadfield.EegRows);
        Assert.Equal(1, leadfield.MegRows);
    }

    [Fact]
    public void PointWithNaN_IsUnusableAndNamed()
    {
        using ScratchFolder folder = new();
        double[] damaged = [.. Eeg];
        damaged[9] = double.NaN;
        (ImportedLeadfield leadfield, IReadOnlyList<string> warnings) = Read(folder, damaged, [3, 2, 3], Meg, [1, 2, 3]);
        Assert.Null(leadfield.Points[0].WhyUnusable);
        Assert.Contains("NaN", leadfield.Points[1].WhyUnusable, StringComparison.Ordinal);
        Assert.Contains("E2", leadfield.Points[1].WhyUnusable, StringComparison.Ordinal);
        Assert.Contains("unusable: q", Assert.Single(warnings), StringComparison.Ordinal);
        damaged[0] = double.PositiveInfinity;
        Assert.Contains("no point is usable", Assert.Throws<InputException>(() => Read(folder, damaged, [3, 2, 3], Meg, [1, 2, 3])).Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData(3, 3, 2)]
    [InlineData(2, 3, 3)]
    [InlineData(6, 3)]
    [InlineData(18)]
    public void OtherShape_IsRefusedWithTheSizesOfTheTables(params int[] shape)
    {
        using ScratchFolder folder = new();
        string message = Assert.Throws<InputException>(() => Read(folder, Eeg, shape, Meg, [1, 2, 3])).Message;
        Assert.Contains(string.Join(" x ", shape), message, StringComparison.Ordinal);
        Assert.Contains("3 x 2 x 3", message, StringComparison.Ordinal);
        Assert.Contains("rows.tsv", message, StringComparison.Ordinal);
        Assert.Contains("points.tsv", message, StringComparison.Ordinal);
    }

    [Fact]
    public void ArrayWithoutRows_IsRefused()
    {
        using ScratchFolder folder = new();
        string message = Assert.Throws<InputException>(() => Read(folder, Eeg, [3, 2, 3], Meg, [1, 2, 3], rows: Rows[..Rows.IndexOf("M1", StringComparison.Ordinal)])).Message;
        Assert.Contains("no MEG row", message, StringComparison.Ordinal);
        Assert.Throws<InputException>(() => Read(folder, null, [], null, []));
    }

    [Fact]
    public void UnlikelyUnit_IsSaid()
    {
        using ScratchFolder folder = new();
        (_, IReadOnlyList<string> warnings) = Read(folder, [.. Eeg.Select(v => v * 1e6)], [3, 2, 3], [.. Meg.Select(v => v * 1e6)], [1, 2, 3]);
        Assert.Equal(2, warnings.Count);
        Assert.All(warnings, w => Assert.Contains("check the unit", w, StringComparison.Ordinal));
    }

    private static (ImportedLeadfield Leadfield, IReadOnlyList<string> Warnings) Read(
        ScratchFolder folder, double[]? eeg, int[] eegShape, double[]? meg, int[] megShape, string rows = Rows)
    {
        (string, string)? Array(string name, double[]? values, int[] shape)
        {
            if (values is null)
            {
                return null;
            }

            NpyWriter.Write(folder.At(name), shape, values);
            return (folder.At(name), name);
        }

        return ImportedLeadfieldReader.Read(
            Array("eeg.npy", eeg, eegShape), Array("meg.npy", meg, megShape),
            (folder.Write("points.tsv", Points), "points.tsv"), (folder.Write("rows.tsv", rows), "rows.tsv"));
    }
}
