using CsCheck;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Leadfields.Voxels;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Leadfields.Voxels;

public class TrilinearHexahedronTests
{
    /// <summary>Newton's method stops at 1e-12 of an edge; a corner's rounding is smaller.</summary>
    private const double Rounding = 1e-10;

    private static readonly Gen<Vec3> Natural = from u in Gen.Double[0, 1] from v in Gen.Double[0, 1] from w in Gen.Double[0, 1] select new Vec3(u, v, w);

    /// <summary>Corners of a unit cube, each moved by up to 0.3, then turned and stretched.</summary>
    private static readonly Gen<Vec3[]> Elements =
        from moves in (from x in Gen.Double[-0.3, 0.3] from y in Gen.Double[-0.3, 0.3] from z in Gen.Double[-0.3, 0.3] select new Vec3(x, y, z)).Array[8]
        select moves.Select((m, c) => VoxelHeads.Oblique.Apply(new Vec3(c & 1, c >> 1 & 1, c >> 2) + m)).ToArray();

    [Fact]
    public void Nearest_OfAPlaceInTheElement_FindsItsNaturalCoordinates() => Gen.Select(Elements, Natural).Sample(
        (places, natural) =>
        {
            (Vec3 found, double distance) = TrilinearHexahedron.Nearest(places, TrilinearHexahedron.Place(places, natural));
            return (found - natural).Norm < Rounding && distance == 0;
        }, iter: 2000);

    [Fact]
    public void Nearest_OfAPointOutside_IsNearerThanEveryOtherPlaceOfTheElement() => Gen.Select(Elements, Natural.Array[40], Natural).Sample(
        (places, others, far) =>
        {
            Vec3 point = TrilinearHexahedron.Place(places, new(0.5, 0.5, 0.5)) + 0.03 * (far - new Vec3(0.5, 0.5, 0.5));
            (_, double distance) = TrilinearHexahedron.Nearest(places, point);
            return others.All(o => distance <= (TrilinearHexahedron.Place(places, o) - point).Norm * (1 + Rounding));
        }, iter: 500);

    [Fact]
    public void Gradients_OfALinearFunction_AreItsSlopeEverywhere() => Gen.Select(Elements, Natural).Sample(
        (places, natural) =>
        {
            Span<Vec3> gradients = stackalloc Vec3[8];
            TrilinearHexahedron.Gradients(places, natural, gradients);
            Vec3 slope = new(3, -2, 5), sum = Vec3.Zero;
            for (int c = 0; c < 8; c++)
            {
                sum += (1 + Vec3.Dot(slope, places[c])) * gradients[c];
            }

            return (sum - slope).Norm < 1e-9;
        }, iter: 1000);

    [Fact]
    public void GaussPoints_AreThoseOfThirdDegree()
    {
        // Textbook: 1/2 -+ 1/(2 sqrt 3).
        RelativeAssert.Equal(0.5 - 0.5 / Math.Sqrt(3), TrilinearHexahedron.GaussLow, 1e-15);
        RelativeAssert.Equal(0.5 + 0.5 / Math.Sqrt(3), TrilinearHexahedron.GaussHigh, 1e-15);
    }

    [Theory]
    [InlineData(false)]
    [InlineData(true)]
    public void Find_GivesTheNearestPlaceOfAllElements(bool shifted)
    {
        var volume = VoxelHeads.Shells(VoxelHeads.Oblique, 7, 6, 6);
        HexMesh mesh = shifted ? VoxelHeads.Shifted(volume) : HexMesh.Plain(volume);
        NearestElement finder = new(mesh, _ => true);
        var nodes = new int[8];
        var places = new Vec3[8];
        for (int k = 0; k < 200; k++)
        {
            Vec3 point = VoxelHeads.Middle(volume) + (0.002 + 0.0003 * k) * GoldenSpiral.Point(k, 200, -1);
            ElementPlace found = finder.Find(point);
            double least = double.PositiveInfinity;
            for (int cell = 0; cell < volume.Grid.Count; cell++)
            {
                if (volume.Cells[cell] != 0)
                {
                    (int i, int j, int l) = volume.Grid.Voxel(cell);
                    TrilinearHexahedron.Load(mesh, i, j, l, nodes, places);
                    least = Math.Min(least, TrilinearHexahedron.Nearest(places, point).Distance);
                }
            }

            Assert.Equal(least, found.Distance);
            TrilinearHexahedron.Load(mesh, found.I, found.J, found.K, nodes, places);
            Assert.InRange((TrilinearHexahedron.Place(places, found.Natural) - point).Norm, 0, least + 1e-11);
        }
    }

    [Fact]
    public void Find_OfAPointThatIsNotANumber_IsRefused()
    {
        NearestElement finder = new(HexMesh.Plain(VoxelHeads.Shells(VoxelHeads.Cubic, 7, 6, 6)), _ => true);
        Assert.Throws<ArgumentException>(() => finder.Find(new(double.NaN, 0, 0)));
    }

    [Fact]
    public void Find_WithoutAnyAdmittedTissue_IsRefused()
    {
        NearestElement finder = new(HexMesh.Plain(VoxelHeads.Shells(VoxelHeads.Cubic, 7, 6, 6)), _ => false);
        Assert.Throws<ArgumentException>(() => finder.Find(Vec3.Zero));
    }
}
