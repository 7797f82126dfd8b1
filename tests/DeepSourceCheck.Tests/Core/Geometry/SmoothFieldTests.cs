using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Geometry;

/// <summary>Fields between voxel centres, and their smoothing.</summary>
public class SmoothFieldTests
{
    private static readonly VoxelGrid Grid = new(24, 20, 22, new(new(0.002, 0, 0), new(0, 0.0015, 0), new(0, 0, 0.003), new(-0.02, 0.01, 0.005)));

    // Values are single precision, differences over millimetres lose three digits.
    private const double SinglePrecision = 1e-6, OfDifferences = 1e-3;

    [Fact]
    public void LinearField_IsReproducedWithItsGradient()
    {
        var slope = new Vec3(3, -2, 0.7);
        var field = new ScalarField(Grid, Values(p => 5 + Vec3.Dot(slope, p)));
        foreach (Vec3 v in new Vec3[] { new(3.3, 7.9, 4.2), new(10, 10, 10), new(20.99, 17.01, 19.5) })
        {
            Vec3 point = Grid.ToWorld.Apply(v);
            RelativeAssert.Equal(5 + Vec3.Dot(slope, point), field.At(point), SinglePrecision);
            Assert.True((field.Gradient(point, 0.002) - slope).Norm < OfDifferences * slope.Norm);
        }
    }

    [Fact]
    public void BeyondTheCentres_TheOutermostValueGoesOn()
    {
        var field = new ScalarField(Grid, Values(p => p.X));
        RelativeAssert.Equal(Grid.Centre(0, 0, 0).X, field.At(new(-10, 0, 0)), SinglePrecision);
        RelativeAssert.Equal(Grid.Centre(23, 0, 0).X, field.At(new(10, 0, 0)), SinglePrecision);
    }

    [Fact]
    public void Blur_KeepsSumsAndConstants_AndSpreadsAPointToTheDeviation()
    {
        float[] flat = Values(_ => 2.5);
        BoxBlur.Smooth(Grid, flat, 0.004);
        Assert.All(flat, v => RelativeAssert.Equal(2.5, v, SinglePrecision));

        var wide = new VoxelGrid(61, 61, 61, new(new(0.001, 0, 0), new(0, 0.001, 0), new(0, 0, 0.001), Vec3.Zero));
        var point = new float[wide.Count];
        int middle = wide.Index(30, 30, 30);
        point[middle] = 1;
        BoxBlur.Smooth(wide, point, 0.004);
        double sum = 0, variance = 0;
        for (int at = 0; at < wide.Count; at++)
        {
            (int i, _, _) = wide.Voxel(at);
            sum += point[at];
            variance += point[at] * (i - 30.0) * (i - 30.0);
        }

        RelativeAssert.Equal(1, sum, 1e-5);

        // Running means over 7 or 9 voxels come to a deviation of 3.46 or 4.47: the nearest to 4 that whole voxels allow.
        Assert.InRange(Math.Sqrt(variance), 3.4, 4.5);
    }

    private static float[] Values(Func<Vec3, double> of) => [.. Enumerable.Range(0, Grid.Count).Select(at => (float)of(Grid.Centre(Grid.Voxel(at).I, Grid.Voxel(at).J, Grid.Voxel(at).K)))];
}
