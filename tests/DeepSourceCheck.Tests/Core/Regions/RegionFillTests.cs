using System.Diagnostics;
using System.Text.Json;

using CsCheck;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Regions;

public class RegionFillTests
{
    private static FilledRegion Fill(Ellipsoid e, double? spacing, IHead? head = null) =>
        RegionFill.Fill("probe", e.Shape, spacing, head ?? TestHeads.Everywhere, "ellipsoid", "study.yaml", "regions[0]");

    private static Ellipsoid Ball(double radius, Vec3 centre = default) => new(centre, new(radius, radius, radius), Rotation.Identity);

    // Reference case 13: exact counts by rational arithmetic on the decimal inputs; its file states its provenance.
    [Fact]
    public void Counts_AreThoseOfReferenceCase13()
    {
        JsonElement root = ReferenceCase.Sphere("13");
        JsonElement[] inputs = [.. root.GetProperty("inputs").GetProperty("ellipsoid").EnumerateArray()];
        JsonElement[] expected = [.. root.GetProperty("expected").GetProperty("ellipsoid").EnumerateArray()];
        Assert.Equal(11, inputs.Length);
        for (int k = 0; k < inputs.Length; k++)
        {
            string label = inputs[k].GetProperty("label").GetString()!;
            double[] c = inputs[k].GetProperty("centre_m").Numbers(), s = inputs[k].GetProperty("semi_axes_m").Numbers();
            double[] m = inputs[k].GetProperty("axes_as_columns").Flat();
            double h = inputs[k].GetProperty("grid_step_m").GetDouble();
            int count = expected[k].GetProperty("count").GetInt32();
            Ellipsoid e = new(
                new(c[0], c[1], c[2]), new(s[0], s[1], s[2]), new(new(m[0], m[1], m[2]), new(m[3], m[4], m[5]), new(m[6], m[7], m[8])));
            RelativeAssert.Equal(expected[k].GetProperty("volume_exact_m3").GetDouble(), e.Volume, 1e-12, label);
            if (count == 0)
            {
                Assert.Contains("no grid node", Assert.Throws<InputException>(() => Fill(e, h)).Message, StringComparison.Ordinal);
                continue;
            }

            FilledRegion region = Fill(e, h);
            Assert.True(region.Positions.Length == count, $"{label}: expected {count}, actual {region.Positions.Length}");
            RelativeAssert.Equal(expected[k].GetProperty("volume_estimate_m3").GetDouble(), region.Volume!.Value, 1e-12, label);
            Assert.Equal(h, region.Spacing);
            Assert.False(region.SpacingRefined);
        }
    }

    [Fact]
    public void Nodes_AreDecimalMultiplesOfTheSpacing()
    {
        FilledRegion region = Fill(Ball(0.005, new(0.0123, -0.0377, 0.0041)), 0.0007);
        Assert.All(region.Positions, p =>
        {
            for (int axis = 0; axis < 3; axis++)
            {
                long i = (long)Math.Round(p[axis] / 0.0007);
                Assert.Equal((double)(i * 7m / 10_000m), p[axis]);
            }
        });
    }

    [Fact]
    public void Nodes_RunWithXFastestAndZSlowest()
    {
        Vec3[] p = Fill(Ball(0.006), 0.002).Positions;
        Assert.Equal(p, p.OrderBy(v => v.Z).ThenBy(v => v.Y).ThenBy(v => v.X));
    }

    // Twin: every node of the box, straight from the definition.
    [Fact]
    public void Nodes_AreAllThatTheDefinitionAdmits() =>
        Gen.Select(Gen.Double[-0.01, 0.01].Array[3], Gen.Double[0.002, 0.008].Array[3], Gen.Double[-3, 3].Array[3]).Sample((c, s, r) =>
        {
            Ellipsoid e = new(new(c[0], c[1], c[2]), new(s[0], s[1], s[2]), Rotation.FromFixedAxes(r[0], r[1], r[2]));
            int count = 0;
            for (int i = -20; i <= 20; i++)
            {
                for (int j = -20; j <= 20; j++)
                {
                    for (int k = -20; k <= 20; k++)
                    {
                        count += e.Q(new(i / 1000.0, j / 1000.0, k / 1000.0)) <= 1 + 1e-9 ? 1 : 0;
                    }
                }
            }

            return Fill(e, 0.001).Positions.Length == count;
        }, seed: "0000000000000009", iter: 20);

    // A ball of 2 mm holds 1 + 6 nodes at 2 mm, and (integer points within 2) 33 at 1 mm, (within 4) 257 at 0.5 mm: the Gauss counts in three dimensions.
    [Theory]
    [InlineData(0.002, 0.0005, 257)]
    [InlineData(0.003, 0.001, 123)]
    [InlineData(0.010, 0.002, 515)]
    public void WithoutSpacing_TwoMillimetresAreHalvedToFiftyDipoles(double radius, double spacing, int count)
    {
        FilledRegion region = Fill(Ball(radius), null);
        RelativeAssert.Equal(spacing, region.Spacing!.Value, 1e-15);
        Assert.Equal(count, region.Positions.Length);
        Assert.Equal(spacing < 0.002, region.SpacingRefined);
    }

    [Fact]
    public void StatedSpacing_IsNeverRefined()
    {
        FilledRegion region = Fill(Ball(0.002), 0.002);
        Assert.Equal(7, region.Positions.Length);
        Assert.False(region.SpacingRefined);
    }

    [Fact]
    public void Refinement_StopsAfterSixHalvings()
    {
        FilledRegion region = Fill(Ball(0.00004), null);
        RelativeAssert.Equal(0.002 / 64, region.Spacing!.Value, 1e-15);
        Assert.InRange(region.Positions.Length, 1, 49);
    }

    [Fact]
    public void AbsurdlyFineSpacing_IsRefusedAtOnceWithTheSmallestAllowed()
    {
        Stopwatch clock = Stopwatch.StartNew();
        InputException error = Assert.Throws<InputException>(() => Fill(Ball(0.01), 1e-9));
        Assert.InRange(clock.ElapsedMilliseconds, 0, 1000);
        Assert.Equal("regions[0]", error.Problems[0].Key);
        Assert.Contains("state a spacing_mm of at least 0.06", error.Message, StringComparison.Ordinal);
        Assert.Throws<InputException>(() => Fill(Ball(0.01), 1e-300));
        Assert.Throws<InputException>(() => Fill(Ball(0.01), double.NaN));
        Assert.Throws<InputException>(() => Fill(Ball(0.01), 0));
    }

    [Theory]
    [InlineData(1e-9, 4_188_790_204_786_390)]
    [InlineData(1e-300, long.MaxValue)]
    public void PredictedCount_NeverOverflows(double spacing, long expected) =>
        Assert.InRange(GridSpacing.PredictCount(Ball(0.0001).Volume, spacing) / (double)expected, 1 - 1e-12, 1 + 1e-12);

    [Fact]
    public void PredictedCount_IsNearTheCount() => Gen.Double[0.002, 0.02].Sample(radius =>
    {
        long predicted = GridSpacing.PredictCount(Ball(radius).Volume, null);
        int actual = Fill(Ball(radius, new(0.0003, 0.0001, -0.0004)), null).Positions.Length;

        // The prediction may stand on either side of one halving: a factor of eight, and the roughness of small balls.
        return predicted is >= 25 && actual / (double)predicted is > 0.08 and < 12 && (radius < 0.006 || Math.Abs(actual / (double)predicted - 1) < 0.15);
    }, seed: "000000000000000a", iter: 60);

    [Fact]
    public void PointsOutsideTheHead_AreDroppedWithRowAndReason()
    {
        // Half of the ball lies beyond the 77.61 mm that the inner sphere admits.
        Ellipsoid ball = Ball(0.004, new(0, -0.018, 0.005 + 0.0776));
        FilledRegion region = Fill(ball, 0.001, TestHeads.Adult);
        int count = Fill(ball, 0.001).Positions.Length;
        Assert.Equal(count, region.Positions.Length + region.Dropped.Count);
        Assert.InRange(region.Dropped.Count / (double)count, 0.35, 0.65);
        Assert.Equal(Enumerable.Range(0, count), region.Rows.Concat(region.Dropped.Select(d => d.Row)).Order());
        Assert.All(region.Dropped, d => Assert.Contains("beyond the 77.6 mm", d.Reason, StringComparison.Ordinal));
        Assert.Contains($"{100.0 * region.Dropped.Count / count:0} %", Assert.Single(region.Warnings), StringComparison.Ordinal);
        Assert.All(region.Positions, p => Assert.Null(TestHeads.Adult.WhyRefused(p)));
    }

    [Fact]
    public void FewDropped_IsNoWarning()
    {
        FilledRegion region = Fill(Ball(0.008, new(0, -0.018, 0.005 + 0.0713)), 0.001, TestHeads.Adult);
        Assert.InRange(region.Dropped.Count / (double)(region.Dropped.Count + region.Positions.Length), 1e-9, 0.1);
        Assert.Empty(region.Warnings);
    }

    [Fact]
    public void RegionOutsideTheHead_IsAnErrorThatNamesRegionHeadAndDistance()
    {
        InputException error = Assert.Throws<InputException>(() => Fill(Ball(0.004, new(0, -0.018, -0.095)), 0.001, TestHeads.Adult));
        Assert.Contains("'probe'", error.Message, StringComparison.Ordinal);
        Assert.Contains("spheres: adult-4", error.Message, StringComparison.Ordinal);
        Assert.Contains("100.0 mm from the sphere's centre", error.Message, StringComparison.Ordinal);
        Assert.Equal("study.yaml", error.Problems[0].File);
    }

    [Fact]
    public void Points_KeepOrderRowsAndNames()
    {
        Vec3[] points = [new(0, 0, 0.05), new(0, 0, 0.2), new(0.01, 0, 0), new(0, 0, 0.05)];
        FilledRegion region = RegionFill.Points("probes", ["a", "b", "c", "d"], points, TestHeads.Adult, "points.tsv");
        Assert.Equal([0, 2, 3], region.Rows);
        Assert.Equal(["a", "c", "d"], region.PointNames);
        DroppedPoint dropped = Assert.Single(region.Dropped);
        Assert.Equal((1, "b"), (dropped.Row, dropped.Name));
        Assert.Null(region.Spacing);
        Assert.Null(region.Volume);
        RelativeAssert.Equal(0.075, region.Centroid.Z, 1e-12);
        Assert.Throws<InputException>(() => RegionFill.Points("none", [], [], TestHeads.Adult, "points.tsv"));
    }

    [Fact]
    public void Mask_IsFilledThroughItsOwnTest()
    {
        // A cube of 4 mm, closed below and open above, as a mask of voxels is.
        RegionShape cube = new(
            p => p.X is >= 0 and < 0.004 && p.Y is >= 0 and < 0.004 && p.Z is >= 0 and < 0.004, Vec3.Zero, new(0.004, 0.004, 0.004), 64e-9, new(0.002, 0.002, 0.002));
        Assert.Equal(64, RegionFill.Fill("cube", cube, 0.001, TestHeads.Everywhere, "mask").Positions.Length);
        FilledRegion refined = RegionFill.Fill("cube", cube, null, TestHeads.Everywhere, "mask");
        Assert.Equal((64, 0.001), (refined.Positions.Length, refined.Spacing));
        RelativeAssert.Equal(64e-9, refined.Volume!.Value, 1e-12);
    }

    [Fact]
    public void CortexShell_IsAnEvenSphereSixMillimetresInsideTheSkull()
    {
        FilledRegion cortex = CortexShell.Fill(TestHeads.Adult);

        // 4 pi 74^2 / 6^2 = 1911.5
        Assert.InRange(cortex.Positions.Length, 1911, 1912);
        Assert.Empty(cortex.Dropped);
        Assert.True(cortex.IsSurface);
        Assert.Null(cortex.Volume);
        Assert.All(cortex.Positions, p => RelativeAssert.Equal(0.074, (p - TestHeads.Adult.Centre).Norm, 1e-12));

        // The golden spiral's nearest neighbours lie at some 0.9 of the spacing.
        double[] nearest = [.. cortex.Positions.Select(p => cortex.Positions.Where(q => q != p).Min(q => (q - p).Norm) / 0.006)];
        Assert.InRange(nearest.Min(), 0.75, 1.05);
        Assert.InRange(nearest.Max(), 0.75, 1.15);
        Assert.Throws<InputException>(() => CortexShell.Fill(TestHeads.Adult, 1e-9));
    }

    [Theory]
    [InlineData("thalamus-left", 0.01, true)]
    [InlineData("thalamus-left", -0.01, false)]
    [InlineData("thalamus-right", -0.01, true)]
    [InlineData("thalamus-right", 0.01, false)]
    [InlineData("midbrain", 0.01, false)]
    [InlineData("nucleus-left", 0.0, false)]
    [InlineData("upright", -0.01, false)]
    public void Side_ContradictsOnlyTheOtherSide(string name, double x, bool contradicts)
    {
        string? text = RegionSide.Contradiction(name, new(x, 0, 0));
        Assert.Equal(contradicts, text is not null);
        Assert.True(text is null || text.Contains(x > 0 ? "right" : "left", StringComparison.Ordinal));
    }
}
