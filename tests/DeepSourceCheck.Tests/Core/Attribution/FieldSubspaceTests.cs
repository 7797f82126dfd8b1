using DeepSourceCheck.Core.Attribution;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Attribution;

/// <summary>Angles between fields and the patterns of a region.</summary>
public class FieldSubspaceTests
{
    // Angles come from square roots of sums of squares that are exact to some 1e-16: 1e-8 rad near 0.
    private const double SmallAngle = 1e-7;

    private static FieldSubspace Of(int rows, params double[][] fields)
    {
        var gram = new double[rows * rows];
        foreach (double[] f in fields)
        {
            for (int k = 0; k < gram.Length; k++)
            {
                gram[k] += f[k / rows] * f[k % rows];
            }
        }

        return new FieldSubspace(gram, rows);
    }

    [Fact]
    public void Angle_OfAFieldInTheSubspace_IsZero_AndOfOneAcrossIt_IsARightAngle()
    {
        FieldSubspace plane = Of(4, [2, 0, 0, 0], [0, 3, 0, 0]);
        Assert.Equal(2, plane.Patterns);
        Assert.InRange(plane.Angle([5, -1, 0, 0]), 0, SmallAngle);
        Assert.InRange(plane.Angle([0, 0, 1e-9, 2e-9]), Math.PI / 2 - SmallAngle, Math.PI / 2);
        RelativeAssert.Equal(Math.PI / 6, plane.Angle([Math.Sqrt(3), 0, 1, 0]), SmallAngle);
        Assert.True(double.IsNaN(plane.Angle([0, 0, 0, 0])));
    }

    [Fact]
    public void PrincipalAngles_OfTwoPlanes_AreTheTwoTurns()
    {
        // The second plane is the first turned by 0.3 in one pair of axes and by 1.1 in another [Bjorck & Golub 1973]: its principal angles are those.
        FieldSubspace a = Of(4, [1, 0, 0, 0], [0, 1, 0, 0]), b = Of(4, [Math.Cos(0.3), 0, Math.Sin(0.3), 0], [0, Math.Cos(1.1), 0, Math.Sin(1.1)]);
        IReadOnlyList<double> angles = a.PrincipalAngles(b);
        Assert.Equal(2, angles.Count);
        RelativeAssert.Equal(0.3, angles[0], SmallAngle);
        RelativeAssert.Equal(1.1, angles[1], SmallAngle);
    }

    [Fact]
    public void Patterns_HoldNinetyNinePercentOfThePower()
    {
        // 100 : 1 : 0.01 in power: the first alone holds 98.99..., the first two hold all but 1e-4.
        Assert.Equal(2, Of(3, [10, 0, 0], [0, 1.01, 0], [0, 0, 0.1]).Patterns);
        Assert.Equal(1, Of(3, [10, 0, 0], [0, 0.99, 0]).Patterns);
    }

    [Fact]
    public void SilentRegion_HasNoPatterns()
    {
        FieldSubspace silent = Of(3, [0, 0, 0]);
        Assert.Equal(0, silent.Patterns);
        Assert.Empty(silent.PrincipalAngles(Of(3, [1, 0, 0])));
        Assert.InRange(silent.Angle([1, 0, 0]), Math.PI / 2 - SmallAngle, Math.PI / 2);
    }
}
