using DeepSourceCheck.Core.Heads.Voxels;

namespace DeepSourceCheck.Tests.Core.Heads.Voxels;

public class TautStringTests
{
    [Fact]
    public void Hollow_IsBridged() => Assert.Equal([0, 1, 3, 4], TautString.Over([(1, 0), (1, 1), (0, 0.5), (-1, 1), (-1, 0)]));

    [Fact]
    public void Ends_AreHeldEvenInAHollow() => Assert.Equal([0, 1, 2], TautString.Over([(0.2, 0), (1, 0.3), (0, 1)]));

    [Fact]
    public void ConvexOutline_IsFollowedThroughout()
    {
        (double, double)[] circle = [.. Enumerable.Range(0, 200).Select(k => (Math.Cos(k / 100.0), Math.Sin(k / 100.0)))];
        Assert.Equal(Enumerable.Range(0, 200), TautString.Over(circle));
    }
}
