using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Leadfields.Voxels;
using DeepSourceCheck.Core.Numerics.Multigrid;
using DeepSourceCheck.Tests.References;

using MathNet.Numerics.LinearAlgebra;

namespace DeepSourceCheck.Tests.Core.Leadfields.Voxels;

/// <summary>The stiffness matrix against the slow twin and against what any conductor obeys.</summary>
public class HexStiffnessTests
{
    /// <summary>Couplings are rounded to single precision: 6e-8 each, relative to the largest of the row.</summary>
    private const double SinglePrecision = 2e-7;

    public static TheoryData<string, bool, bool> Cases => new()
    {
        { "cubes", false, false }, { "cubes", true, false }, { "cubes", false, true }, { "cubes", true, true },
        { "flat", false, false }, { "flat", true, true }, { "oblique", false, false }, { "oblique", true, false }, { "oblique", false, true },
    };

    internal static (HexMesh Mesh, ConductivityTensors? Tensors) Head(string map, bool adapted, bool anisotropic)
    {
        TissueVolume volume = MeshHeads.Layered(9, 11, 10, map switch { "cubes" => MeshHeads.Cubes, "flat" => MeshHeads.Flat, _ => MeshHeads.Oblique });
        HexMesh mesh = HexMesh.Plain(volume);
        return (adapted ? AdaptedNodes.Adapt(mesh) : mesh, anisotropic ? MeshHeads.Tensors(volume) : null);
    }

    [Theory]
    [MemberData(nameof(Cases))]
    public void Assemble_IsTheSlowTwin(string map, bool adapted, bool anisotropic)
    {
        (HexMesh mesh, ConductivityTensors? tensors) = Head(map, adapted, anisotropic);
        StencilOperator fast = HexStiffness.Assemble(mesh, tensors, 2);
        Matrix<double> slow = PlainFiniteElements.Stiffness(mesh, tensors);
        for (int node = 0; node < mesh.Nodes.Count; node++)
        {
            (int x, int y, int z) = mesh.Nodes.Node(node);
            double largest = slow[node, node], found = 0;
            for (int k = 0; k < Stencil.Size; k++)
            {
                (int dx, int dy, int dz) = Stencil.Step(k);
                int other = mesh.Nodes.IndexOf(x + dx, y + dy, z + dz);
                double expected = other >= 0 ? slow[node, other] : 0;
                double actual = k == Stencil.Centre ? StencilOperator.Diagonal(fast.Row(node)) : -fast.Row(node)[k];
                Assert.True(Math.Abs(expected - actual) <= SinglePrecision * largest, $"node {node} place {k}: {expected:R} against {actual:R}");
                found += expected;
            }

            Assert.True(Math.Abs(found) <= 1e-12 * largest, $"row {node} of the twin sums to {found}: neighbours outside the stencil");
        }
    }

    [Theory]
    [MemberData(nameof(Cases))]
    public void Assemble_IsSymmetricToTheLastBit(string map, bool adapted, bool anisotropic)
    {
        (HexMesh mesh, ConductivityTensors? tensors) = Head(map, adapted, anisotropic);
        StencilOperator a = HexStiffness.Assemble(mesh, tensors, 1);
        int pairs = 0;
        for (int node = 0; node < mesh.Nodes.Count; node++)
        {
            (int x, int y, int z) = mesh.Nodes.Node(node);
            for (int k = 0; k < Stencil.Centre; k++)
            {
                (int dx, int dy, int dz) = Stencil.Step(k);
                if (mesh.Nodes.IndexOf(x + dx, y + dy, z + dz) is >= 0 and int other)
                {
                    pairs += a.Row(node)[k] != 0 ? 1 : 0;
                    Assert.Equal(a.Row(node)[k], a.Row(other)[Stencil.Size - 1 - k]);
                }
            }
        }

        Assert.True(pairs > 5 * mesh.Nodes.Count, $"only {pairs} couplings");
    }

    [Theory]
    [InlineData("cubes", false)]
    [InlineData("cubes", true)]
    [InlineData("flat", true)]
    [InlineData("oblique", false)]
    [InlineData("oblique", true)]
    public void Assemble_OfLinearFieldInOneTissue_HasNoSourceInside(string map, bool adapted)
    {
        // The layers keep their places but conduct alike: a linear potential is a solution, and trilinear elements hold it exactly, moved nodes or not.
        (HexMesh layered, _) = Head(map, adapted, false);
        Tissue[] alike = [.. MeshHeads.Tissues.Select(t => t with { Conductivity = t.Conductivity > 0 ? 0.33 : 0 })];
        HexMesh mesh = HexMesh.Plain(new TissueVolume(layered.Volume.Grid, layered.Volume.Cells.ToArray(), alike));
        mesh = adapted ? mesh.Adapted([.. Enumerable.Range(0, mesh.Nodes.Count).Select(layered.Shift)]) : mesh;
        StencilOperator a = HexStiffness.Assemble(mesh, null, 1);
        int inside = 0, moved = 0;
        for (int node = 0; node < mesh.Nodes.Count; node++)
        {
            (int x, int y, int z) = mesh.Nodes.Node(node);
            if (!Enumerable.Range(0, 8).All(c => IsTissue(mesh, x - 1 + c % 2, y - 1 + c / 2 % 2, z - 1 + c / 4)))
            {
                continue;
            }

            inside++;
            moved += mesh.Shift(node) == Vec3.Zero ? 0 : 1;
            double sum = 0, size = 0;
            for (int k = 0; k < Stencil.Size; k++)
            {
                (int dx, int dy, int dz) = Stencil.Step(k);
                int other = mesh.Nodes.IndexOf(x + dx, y + dy, z + dz);
                if (k != Stencil.Centre && other >= 0)
                {
                    double term = a.Row(node)[k] * (Linear(mesh, x, y, z, node) - Linear(mesh, x + dx, y + dy, z + dz, other));
                    sum += term;
                    size += Math.Abs(term);
                }
            }

            Assert.True(Math.Abs(sum) <= SinglePrecision * size, $"node {node}: {sum} of {size}");
        }

        Assert.True(inside > 100 && (!adapted || moved > 50), $"{inside} nodes inside, {moved} moved");
    }

    [Fact]
    public void Assemble_IsTheSameForAnyThreads()
    {
        (HexMesh mesh, ConductivityTensors? tensors) = Head("oblique", true, true);
        StencilOperator one = HexStiffness.Assemble(mesh, tensors, 1), two = HexStiffness.Assemble(mesh, tensors, 2);
        for (int node = 0; node < mesh.Nodes.Count; node++)
        {
            Assert.True(one.Row(node).SequenceEqual(two.Row(node)));
        }
    }

    [Fact]
    public void Assemble_OnPlainGrid_SharesRows()
    {
        HexMesh mesh = HexMesh.Plain(MeshHeads.Box(12, 9, 10, MeshHeads.Cubes));
        StencilOperator a = HexStiffness.Assemble(mesh, null, 1);
        Assert.Equal(27, a.Distinct);           // inside, 6 faces, 12 edges, 8 corners
        float[] inside = a.Row(mesh.Nodes.IndexOf(5, 5, 5)).ToArray();
        float edge = inside[Stencil.At(1, 1, 0)];
        Assert.Equal(0, inside[Stencil.At(1, 0, 0)]);
        Assert.All(Enumerable.Range(0, 27).Where(k => k != Stencil.Centre), k => Assert.Equal(new[] { 0, 0, edge, inside[0] }[StepsOf(k)], inside[k]));

        // Textbook stencil of trilinear cubes of edge h: -sigma h / 6 to the 12 neighbours over an edge, -sigma h / 12 to the 8 over a corner.
        Assert.Equal(0.33 * 0.002 / 6, edge, 1e-7 * edge);
        Assert.Equal(0.33 * 0.002 / 12, inside[0], 1e-7 * edge);

        static int StepsOf(int place)
        {
            (int dx, int dy, int dz) = Stencil.Step(place);
            return Math.Abs(dx) + Math.Abs(dy) + Math.Abs(dz);
        }
    }

    private static bool IsTissue(HexMesh mesh, int i, int j, int k)
    {
        VoxelGrid grid = mesh.Volume.Grid;
        return i >= 0 && j >= 0 && k >= 0 && i < grid.Nx && j < grid.Ny && k < grid.Nz && mesh.Volume.Cells[grid.Index(i, j, k)] != 0;
    }

    private static double Linear(HexMesh mesh, int x, int y, int z, int node) => Vec3.Dot(new(30, -50, 80), mesh.Position(x, y, z, node));
}
