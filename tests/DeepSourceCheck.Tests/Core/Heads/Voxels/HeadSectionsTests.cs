using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Heads.Voxels;

public class HeadSectionsTests
{
    private const double Edge = 0.002;

    // Borders of voxels lie up to a voxel from the sphere that they stand for.
    private const double Within = Edge;

    private static readonly Lazy<TissueVolume> Volume = new(() => SphereVolumes.Of(Edge));

    [Theory]
    [InlineData(0)]
    [InlineData(1)]
    [InlineData(2)]
    public void Outlines_OfASphere_AreTheCirclesInWhichThePlanesCutIt(int axis)
    {
        Vec3 through = new(0.010, -0.020, 0.030);
        double off = axis switch { 0 => through.X, 1 => through.Y, _ => through.Z };
        IReadOnlyList<HeadOutline> outlines = [.. HeadSections.Of(Volume.Value, through).Where(o => o.Axis == axis)];
        Assert.Equal(["scalp", "bone", "brain"], outlines.Select(o => o.Surface));
        Circles(outlines[0], SphereVolumes.Radii[0]);
        Circles(outlines[1], SphereVolumes.Radii[1], SphereVolumes.Radii[2]);
        Circles(outlines[2], SphereVolumes.Radii[3]);

        void Circles(HeadOutline outline, params double[] radii)
        {
            Assert.Equal(radii.Length, outline.Lines.Count);
            Assert.All(outline.Lines, line => Assert.Contains(radii, radius => line.All(p =>
                Math.Abs(Distance(p) - Math.Sqrt(radius * radius - off * off)) < Within && Coordinate(p) == off)));
        }

        double Coordinate(Vec3 p) => axis switch { 0 => p.X, 1 => p.Y, _ => p.Z };
        double Distance(Vec3 p) => Math.Sqrt(Vec3.Dot(p, p) - off * off);
    }

    [Fact]
    public void Outlines_LeaveSpecksAndHolesOfTheScalpAway()
    {
        // A cavity of one voxel in the scalp, a speck of bone in the brain.
        TissueVolume volume = Volume.Value.With((new(0.001, 0.087, 0.001), 0), (new(0.031, 0.001, 0.001), 2));
        IReadOnlyList<HeadOutline> outlines = HeadSections.Of(volume, new(0.001, 0.001, 0.001));
        Assert.All(outlines, o => Assert.Equal(o.Surface == "bone" ? 2 : 1, o.Lines.Count));
    }

    [Fact]
    public void Plane_BesideTheHead_CutsNothing() =>
        Assert.DoesNotContain(HeadSections.Of(Volume.Value, new(0, 0, 0.085)), o => o.Axis == 2 && o.Surface != "scalp");
}
