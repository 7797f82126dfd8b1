using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Imported;
using DeepSourceCheck.Core.Sensors;

namespace DeepSourceCheck.Tests.Core.Leadfields;

public sealed class ImportedLeadfieldTests
{
    private static readonly ImportedPoint[] Points = [new("a", new(0.01, 0, 0), null), new("b", new(0.02, 0, 0), null), new("c", new(0.03, 0, 0), null)];
    private static readonly ImportedRow[] Electrodes = [new("E1", null, null), new("E2", null, null)];
    private static readonly ImportedRow[] Coils = [new("M1", CoilKind.Magnetometer, null)];

    [Fact]
    public void Fill_LooksUpEachLaneByItsSourceIndex()
    {
        double[] eeg = [.. Enumerable.Range(0, 18).Select(n => (double)n)];
        double[] meg = [.. Enumerable.Range(100, 9).Select(n => (double)n)];
        ImportedLeadfield leadfield = new(Points, Electrodes, eeg, Coils, meg);
        LeadfieldBlock block = new(2, 1);
        block.Load([Points[2].Position, Points[0].Position], [2, 0]);
        leadfield.Fill(block);
        for (int axis = 0; axis < 3; axis++)
        {
            // rows x points x 3, axis fastest: row 1, point 2 begins at 3 (1 * 3 + 2).
            Assert.Equal(15 + axis, block.Eeg[LeadfieldBlock.At(1, axis)]);
            Assert.Equal(9 + axis, block.Eeg[LeadfieldBlock.At(1, axis) + 1]);
            Assert.Equal(106 + axis, block.Meg[LeadfieldBlock.At(0, axis)]);
            Assert.Equal(100 + axis, block.Meg[LeadfieldBlock.At(0, axis) + LeadfieldBlock.Lanes - 1]);
        }
    }

    [Fact]
    public void Fill_WithoutPointIndex_IsRefused()
    {
        ImportedLeadfield leadfield = new(Points, Electrodes, new double[18], [], []);
        LeadfieldBlock block = new(2, 0);
        block.Load([Vec3.Zero], []);
        Assert.Throws<ArgumentException>(() => leadfield.Fill(block));
        Assert.Throws<ArgumentException>(() => leadfield.Fill(new LeadfieldBlock(1, 0)));
    }

    [Fact]
    public void ArraysOfOtherLength_AreRefused() => Assert.Throws<ArgumentException>(() => new ImportedLeadfield(Points, Electrodes, new double[17], [], []));

    [Fact]
    public void IndexOf_FindsPointsByName()
    {
        ImportedLeadfield leadfield = new(Points, Electrodes, new double[18], [], []);
        Assert.Equal(1, leadfield.IndexOf("b"));
        Assert.Equal(-1, leadfield.IndexOf("B"));
    }
}
