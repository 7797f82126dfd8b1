using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Leadfields.Voxels;

namespace DeepSourceCheck.Tests.Core.Leadfields.Voxels;

/// <summary>Moves of interface nodes.</summary>
public class AdaptedNodesTests
{
    [Fact]
    public void Move_AtAFlatInterface_IsNone() => Assert.Equal(Vec3.Zero, Move(1, 1, 1, 1, 2, 2, 2, 2));

    [Fact]
    public void Move_InsideATissue_IsNone() => Assert.Equal(Vec3.Zero, Move(3, 3, 3, 3, 3, 3, 3, 3));

    [Fact]
    public void Move_AtACorner_GoesIntoTheOneVoxelThatDiffers()
    {
        Vec3 move = Move(2, 1, 1, 1, 1, 1, 1, 1);
        Assert.True(move.X < 0 && move.X == move.Y && move.Y == move.Z, $"{move}");
    }

    [Fact]
    public void Move_AtAnEdge_StaysAcrossTheEdge()
    {
        Vec3 move = Move(1, 2, 1, 1, 1, 2, 1, 1);
        Assert.True(move.X > 0 && move.Y == -move.X && move.Z == 0, $"{move}");
    }

    [Fact]
    public void Move_TowardsAirOrTissue_IsMirroredWhenTheyChangePlaces()
    {
        // One voxel of air in tissue and one voxel of tissue in air draw the surface the same way.
        Assert.Equal(Move(0, 4, 4, 4, 4, 4, 4, 4), Move(4, 0, 0, 0, 0, 0, 0, 0));
    }

    [Fact]
    public void Move_AmongEquals_GoesByTheKindOfTissueAlone()
    {
        // Two voxels of bone and two of fluid in brain: towards the bone, whatever the order of labels.
        Tissue air = MeshHeads.Tissues[0], skull = new(1, "skull", TissueKind.Skull, 0.01), csf = new(2, "csf", TissueKind.Csf, 1.79), grey = new(3, "grey", TissueKind.Grey, 0.33);
        Vec3 one = AdaptedNodes.Move([1, 1, 2, 2, 3, 3, 3, 3], AdaptedNodes.Ranks([air, skull, csf, grey]));
        Vec3 other = AdaptedNodes.Move([3, 3, 1, 1, 2, 2, 2, 2], AdaptedNodes.Ranks([air, csf, grey, skull]));
        Assert.Equal(one, other);
        Assert.True(one.Y < 0 && one.Z < 0 && one.X == 0, $"{one}");
    }

    [Fact]
    public void Adapt_BringsNodesNearerToTheSpheresThatWereSampled()
    {
        TissueVolume volume = Sphere(out double[] radii);
        HexMesh plain = HexMesh.Plain(volume), adapted = AdaptedNodes.Adapt(plain);
        (double before, double after, int nodes) = (0, 0, 0);
        for (int n = 0; n < plain.Nodes.Count; n++)
        {
            if (adapted.Shift(n) != Vec3.Zero)
            {
                (int x, int y, int z) = plain.Nodes.Node(n);
                before += Squared(plain.Position(x, y, z, n).Norm, radii);
                after += Squared(adapted.Position(x, y, z, n).Norm, radii);
                nodes++;
            }
        }

        Assert.True(nodes > 1000, $"{nodes} nodes moved");
        Assert.True(after < 0.5 * before, $"root mean square distance {Math.Sqrt(before / nodes)} m, adapted {Math.Sqrt(after / nodes)} m");
    }

    [Theory]
    [InlineData("cubes")]
    [InlineData("flat")]
    [InlineData("oblique")]
    public void Adapt_LeavesEveryElementSound(string map)
    {
        // Labels at random: every pattern of eight voxels comes up.
        var random = new Random(7);
        var grid = new VoxelGrid(15, 14, 13, map == "cubes" ? MeshHeads.Cubes : map == "flat" ? MeshHeads.Flat : MeshHeads.Oblique);
        var volume = new TissueVolume(grid, [.. Enumerable.Range(0, grid.Count).Select(_ => (byte)random.Next(5))], MeshHeads.Tissues);
        HexMesh mesh = AdaptedNodes.Adapt(HexMesh.Plain(volume));
        int moved = 0;
        for (int v = 0; v < grid.Count; v++)
        {
            if (volume.Cells[v] == 0)
            {
                continue;
            }

            (int i, int j, int k) = grid.Voxel(v);
            var corners = new Vec3[8];
            for (int c = 0; c < 8; c++)
            {
                int node = mesh.Nodes.IndexOf(i + c % 2, j + c / 2 % 2, k + c / 4);
                corners[c] = mesh.Position(i + c % 2, j + c / 2 % 2, k + c / 4, node);
                moved += mesh.Shift(node) == Vec3.Zero ? 0 : 1;
            }

            // The volume of the tetrahedron at each corner, against the voxel's: none may fold.
            for (int c = 0; c < 8; c++)
            {
                double volumeThere = Vec3.Dot(corners[c | 1] - corners[c & ~1], Vec3.Cross(corners[c | 2] - corners[c & ~2], corners[c | 4] - corners[c & ~4]));
                Assert.True(volumeThere / grid.ToWorld.Determinant >= AdaptedNodes.LeastDeterminant, $"voxel {v} corner {c}");
            }
        }

        Assert.True(moved > 1000, $"{moved}");
    }

    internal static TissueVolume Sphere(out double[] radii)
    {
        radii = [0.046, 0.043, 0.040, 0.037];
        double[] of = radii;
        const double Edge = 0.002;
        var grid = new VoxelGrid(48, 48, 48, new(new(Edge, 0, 0), new(0, Edge, 0), new(0, 0, Edge), new(-23.5 * Edge, -23.5 * Edge, -23.5 * Edge)));
        byte[] cells = [.. Enumerable.Range(0, grid.Count).Select(v => grid.Voxel(v)).Select(v => (byte)of.Count(r => grid.Centre(v.I, v.J, v.K).Norm < r))];
        return new TissueVolume(grid, cells, MeshHeads.Tissues);
    }

    private static double Squared(double radius, double[] radii) => radii.Min(r => (radius - r) * (radius - r));

    private static Vec3 Move(params byte[] around) => AdaptedNodes.Move(around, AdaptedNodes.Ranks(MeshHeads.Tissues));
}
