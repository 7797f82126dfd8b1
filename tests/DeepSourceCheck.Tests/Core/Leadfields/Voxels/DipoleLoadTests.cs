using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Leadfields.Voxels;

namespace DeepSourceCheck.Tests.Core.Leadfields.Voxels;

/// <summary>Moments and nodes of both source models.</summary>
public class DipoleLoadTests
{
    /// <summary>The hard ridge of 1e-9 on the sum and the moment, with weights of some units.</summary>
    private const double Hard = 1e-6;

    /// <summary>The soft ridge of 1e-4 on second moments, in voxels squared: far below the half voxel by which a source's place is uncertain.</summary>
    private const double Soft = 5e-3;

    public static TheoryData<bool, bool> Grids => new() { { false, false }, { false, true }, { true, false }, { true, true } };

    private static HexMesh Mesh(bool oblique, bool shifted, int nx = 14, int ny = 13, int nz = 12)
    {
        TissueVolume volume = VoxelHeads.Shells(oblique ? VoxelHeads.Oblique : VoxelHeads.Cubic, nx, ny, nz);
        return shifted ? VoxelHeads.Shifted(volume) : HexMesh.Plain(volume);
    }

    private static (int[] Nodes, Vec3[] Weights, Vec3[] Places, DipoleSupport Support) Place(DipoleLoad load, Vec3 position)
    {
        var nodes = new int[DipoleLoad.MostNodes];
        var weights = new Vec3[DipoleLoad.MostNodes];
        int count = load.Place(position, nodes, weights, out DipoleSupport support);
        HexMesh mesh = load.Tissue.Mesh;
        return (nodes[..count], weights[..count], [.. nodes[..count].Select(n => { (int x, int y, int z) = mesh.Nodes.Node(n); return mesh.Position(x, y, z, n); })], support);
    }

    [Theory]
    [MemberData(nameof(Grids))]
    public void BothLoads_SumToZeroAndGiveTheMoment(bool oblique, bool shifted)
    {
        HexMesh mesh = Mesh(oblique, shifted);
        SourceTissue tissue = new(mesh);
        foreach (DipoleLoad load in new[] { DipoleLoad.Of(DipoleLoadKind.Monopoles, tissue), DipoleLoad.Of(DipoleLoadKind.ElementGradient, tissue) })
        {
            foreach (Vec3 position in VoxelHeads.Dipoles(mesh.Volume, 60))
            {
                (int[] nodes, Vec3[] weights, Vec3[] places, _) = Place(load, position);
                Vec3 sum = Vec3.Zero, x = Vec3.Zero, y = Vec3.Zero, z = Vec3.Zero;
                for (int n = 0; n < nodes.Length; n++)
                {
                    sum += weights[n];
                    x += (places[n] - position).X * weights[n];
                    y += (places[n] - position).Y * weights[n];
                    z += (places[n] - position).Z * weights[n];
                }

                Assert.InRange(sum.Norm * 0.008, 0, Hard);
                Assert.InRange((x - new Vec3(1, 0, 0)).Norm + (y - new Vec3(0, 1, 0)).Norm + (z - new Vec3(0, 0, 1)).Norm, 0, 3 * Hard);
                Assert.Equal(nodes.Length, nodes.Distinct().Count());
            }
        }
    }

    [Theory]
    [MemberData(nameof(Grids))]
    public void Monopoles_WithAllNodesWithin_HaveNoSecondMoment(bool oblique, bool shifted)
    {
        HexMesh mesh = Mesh(oblique, shifted, 19, 18, 17);
        MonopoleLoad load = new(new(mesh));
        int whole = 0;
        foreach (Vec3 position in VoxelHeads.Dipoles(mesh.Volume, 200))
        {
            (int[] nodes, Vec3[] weights, Vec3[] places, DipoleSupport support) = Place(load, position);
            if (support != DipoleSupport.Whole)
            {
                continue;
            }

            whole++;
            Assert.Equal(27, nodes.Length);
            for (int a = 0; a < 3; a++)
            {
                for (int b = a; b < 3; b++)
                {
                    Vec3 second = Vec3.Zero;
                    for (int n = 0; n < nodes.Length; n++)
                    {
                        Vec3 s = (places[n] - position) / 0.008;
                        second += s[a] * s[b] * 0.008 * weights[n];
                    }

                    Assert.InRange(second.Norm, 0, Soft);
                }
            }
        }

        Assert.True(whole > 20, $"only {whole} dipoles have all their nodes within: the check is blind");
    }

    [Fact]
    public void Monopoles_NearTheBorder_StayOnNodesWithinSourceTissue()
    {
        HexMesh mesh = Mesh(false, false);
        MonopoleLoad load = new(new(mesh));
        int partial = 0;
        foreach (Vec3 position in VoxelHeads.Dipoles(mesh.Volume, 200))
        {
            (int[] nodes, _, Vec3[] places, DipoleSupport support) = Place(load, position);
            Assert.All(places, p => Assert.InRange((p - position).Norm, 0, 2.5 * Math.Sqrt(3) * 0.008));
            if (support is DipoleSupport.Whole or DipoleSupport.Partial)
            {
                partial += support == DipoleSupport.Partial ? 1 : 0;
                Assert.All(nodes, n => Assert.True(load.Tissue.IsWithin(n)));
            }
        }

        Assert.True(partial > 10, $"only {partial} dipoles stand near the border: the check is blind");
    }

    [Fact]
    public void Monopoles_InASheetOfOneVoxel_UseItsBorderNodes()
    {
        VoxelGrid grid = new(9, 9, 9, VoxelHeads.Cubic);
        TissueVolume volume = new(grid, [.. Enumerable.Range(0, grid.Count).Select(c => (byte)(grid.Voxel(c).K == 4 ? 4 : 3))], VoxelHeads.Tissues());
        MonopoleLoad load = new(new(HexMesh.Plain(volume)));
        (int[] nodes, _, _, DipoleSupport support) = Place(load, grid.ToWorld.Apply(new(4.2, 4.3, 4.1)));
        Assert.Equal(DipoleSupport.Border, support);
        Assert.All(nodes, n => Assert.True(load.Tissue.Touches(n) && !load.Tissue.IsWithin(n)));
    }

    [Fact]
    public void Monopoles_InALoneVoxel_StillGiveTheMoment()
    {
        VoxelGrid grid = new(5, 5, 5, VoxelHeads.Cubic);
        TissueVolume volume = new(grid, [.. Enumerable.Range(0, grid.Count).Select(c => (byte)(grid.Voxel(c) == (2, 2, 2) ? 4 : 3))], VoxelHeads.Tissues());
        MonopoleLoad load = new(new(HexMesh.Plain(volume)));
        Vec3 position = grid.ToWorld.Apply(new(2.1, 1.8, 2.3));
        (int[] nodes, Vec3[] weights, Vec3[] places, DipoleSupport support) = Place(load, position);
        Assert.Equal((DipoleSupport.Border, 8), (support, nodes.Length));
        Vec3 alongZ = Vec3.Zero;
        for (int n = 0; n < nodes.Length; n++)
        {
            alongZ += (places[n] - position).Z * weights[n];
        }

        Assert.InRange((alongZ - new Vec3(0, 0, 1)).Norm, 0, 1e-4);
    }

    [Theory]
    [InlineData(DipoleLoadKind.Monopoles)]
    [InlineData(DipoleLoadKind.ElementGradient)]
    public void Load_OfADipoleInOtherTissue_IsRefusedWithItsName(DipoleLoadKind kind)
    {
        HexMesh mesh = Mesh(false, false);
        DipoleLoad load = DipoleLoad.Of(kind, new(mesh));
        int cell = mesh.Volume.Cells.IndexOf((byte)3);
        (int i, int j, int k) = mesh.Volume.Grid.Voxel(cell);
        ArgumentOutOfRangeException error = Assert.Throws<ArgumentOutOfRangeException>(() => Place(load, mesh.Volume.Grid.Centre(i, j, k)));
        Assert.Contains("csf", error.Message, StringComparison.Ordinal);
        Assert.Throws<ArgumentOutOfRangeException>(() => Place(load, new(1, 1, 1)));
        Assert.Throws<ArgumentOutOfRangeException>(() => Place(load, new(double.NaN, 0, 0)));
    }

    [Fact]
    public void ElementGradient_OfADipoleThatAMovedFacePutsOutside_TakesTheElementThatHoldsIt()
    {
        HexMesh mesh = Mesh(true, true);
        ElementGradientLoad load = new(new(mesh));
        var own = new int[8];
        var places = new Vec3[8];
        int moved = 0;
        foreach (Vec3 position in VoxelHeads.Dipoles(mesh.Volume, 300))
        {
            (int i, int j, int k) = mesh.Volume.Grid.Voxel(mesh.Volume.Grid.IndexAt(position));
            TrilinearHexahedron.Load(mesh, i, j, k, own, places);
            (int[] nodes, _, _, _) = Place(load, position);
            if (TrilinearHexahedron.Nearest(places, position).Distance > 0)
            {
                moved += nodes.SequenceEqual(own) ? 0 : 1;
            }
            else
            {
                Assert.Equal(own, nodes);
            }
        }

        Assert.True(moved > 3, $"only {moved} dipoles changed their element: the check is blind");
    }

    [Fact]
    public void KeptNodes_HoldEveryNodeThatAnyDipoleUses()
    {
        HexMesh mesh = Mesh(true, true);
        SourceTissue tissue = new(mesh);
        KeptNodes all = KeptNodes.All(tissue);
        Assert.True(all.HoldsAll);
        Vec3[] dipoles = VoxelHeads.Dipoles(mesh.Volume, 150);
        foreach (DipoleLoadKind kind in Enum.GetValues<DipoleLoadKind>())
        {
            DipoleLoad load = DipoleLoad.Of(kind, tissue);
            Assert.All(dipoles, d => Assert.All(Place(load, d).Nodes, n => Assert.InRange(all.RowOf(n), 0, all.Count - 1)));
        }
    }

    [Fact]
    public void KeptNodes_BeyondTheBudget_AreThoseThatTheDipolesUse()
    {
        HexMesh mesh = Mesh(false, false);
        MonopoleLoad load = new(new(mesh));
        Vec3[] dipoles = VoxelHeads.Dipoles(mesh.Volume, 2);
        KeptNodes all = KeptNodes.All(load.Tissue);
        long needed = TransferRows.BytesFor(all.Count, 355);
        Assert.Equal(all.Count * 368L * 4, needed);         // 355 rounded up to whole vectors of sixteen
        Assert.True(KeptNodes.Within(load, 355, needed, dipoles).HoldsAll);
        KeptNodes some = KeptNodes.Within(load, 355, needed - 1, dipoles);
        Assert.False(some.HoldsAll);
        Assert.Equal(dipoles.SelectMany(d => Place(load, d).Nodes).Distinct().Order(), some.Nodes.ToArray());
        Assert.All(some.Nodes.ToArray(), n => Assert.Equal(n, some.Nodes[some.RowOf(n)]));
    }
}
