using DeepSourceCheck.Core.Directions;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Tests.Core.Directions;

/// <summary>What a sphere's centre that is off does to MEG.</summary>
public class CentreShiftTests
{
    private static readonly Vec3 Centre = new(0, -0.018, 0.005), Axis = new Vec3(0.3, -0.6, 0.74).Unit();

    private static readonly MegChannel[] Channels =
        CoilArray.Generate(new CoilArrayChoice("magnetometer", 200, 0, 0.02, CoilArray.DefaultEdgeFront, CoilArray.DefaultEdgeBack), Centre, 0.092);

    private static readonly double[] Deviations = [.. Enumerable.Repeat(1e-13, Channels.Length)];

    [Theory]
    [InlineData(0.010, 0.62, 1.48, 0.12)]
    [InlineData(0.040, 0.89, 1.12, 0.04)]
    public void SecondSingularValue_UnderShiftsOf5Mm_ChangesAsMeasuredElsewhere(double radius, double low, double high, double array)
    {
        // Measured on another array with an independent program: 0.62 to 1.48 at 10 mm off centre, 0.89 to 1.12 at 40 mm. The array and the axis differ, hence the last column.
        Vec3 position = Centre + radius * Axis;
        double nominal = CentreShift.Strongest(position, Centre, Channels, Deviations).Second;
        double[] ratios = [.. CentreShift.Moves(0.005).Select(move => CentreShift.Strongest(position, Centre + move, Channels, Deviations).Second / nominal)];
        Assert.InRange(ratios.Min(), low - array, low + array);
        Assert.InRange(ratios.Max(), high - array, high + array);
    }

    [Fact]
    public void Range_GrowsWithTheShift_AndShrinksWithTheDistance()
    {
        CentreSensitivity[] at = [.. new[] { 0.012, 0.02, 0.035, 0.06 }.Select(r => CentreShift.Of(Centre + r * Axis, Centre, Channels, Deviations))];
        string all = string.Join("; ", at.Select(one => string.Join(", ", one.Ranges)));
        foreach (CentreSensitivity one in at)
        {
            Assert.Equal([0.005, 0.010], one.Ranges.Select(r => r.Shift));
            Assert.True(one.Ranges[0].HighestDb > 0, all);
            Assert.True(Width(one, 1) > 1.5 * Width(one, 0), all);
        }

        for (int k = 1; k < at.Length; k++)
        {
            Assert.True(Width(at[k], 0) < Width(at[k - 1], 0), all);
        }

        static double Width(CentreSensitivity one, int shift) => one.Ranges[shift].HighestDb - one.Ranges[shift].LowestDb;
    }

    [Fact]
    public void ShiftOntoTheSource_SilencesIt_AndASourceAtTheCentreHasNoRange()
    {
        CentreSensitivity onto = CentreShift.Of(Centre + new Vec3(0, 0, 0.010), Centre, Channels, Deviations);
        Assert.True(onto.Ranges[1].LowestDb < -200, "the shift of 10 mm upwards meets the source, to rounding");
        Assert.Empty(CentreShift.Of(Centre, Centre, Channels, Deviations).Ranges);
        Assert.Equal(0, CentreShift.Of(Centre, Centre, Channels, Deviations).Distance, 0.0);
    }

    [Fact]
    public void Noise_OfAllChannelsAlike_DoesNotMatter()
    {
        CentreSensitivity one = CentreShift.Of(Centre + 0.012 * Axis, Centre, Channels, Deviations), loud = CentreShift.Of(Centre + 0.012 * Axis, Centre, Channels, [.. Deviations.Select(d => 4 * d)]);
        Assert.Equal(one.Ranges, loud.Ranges);
    }
}
