using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Numerics.Multigrid;

namespace DeepSourceCheck.Core.Leadfields.Voxels;

/// <summary>Assembles the stiffness matrix of a head: one 27-point row a node [S].</summary>
/// <remarks>
/// On the plain grid all elements are one matrix times their conductivity, and nodes with the same eight conductivities share a row. Elements with moved nodes or a tensor are integrated
/// one by one. Symmetric to the last bit: both rows of a pair of nodes add the same elements in the same order.
/// </remarks>
internal static class HexStiffness
{
    /// <summary>Planes of nodes that one task assembles.</summary>
    private const int Slab = 8;

    /// <summary>Entries of the unit element below this share of the largest are rounding: edges of cubes do not couple.</summary>
    private const double Rounding = 1e-13;

    /// <summary>The stiffness matrix.</summary>
    /// <param name="mesh">Elements.</param>
    /// <param name="tensors">Conductivity tensors of some elements, or null.</param>
    /// <param name="threads">Threads; the result does not depend on them.</param>
    public static StencilOperator Assemble(HexMesh mesh, ConductivityTensors? tensors, int threads)
    {
        var classes = new NodeClasses(mesh, tensors);
        float[] table = GC.AllocateArray<float>(checked((classes.Shared + classes.Own) * Stencil.Stride), pinned: true);
        double[] unit = UnitElement(mesh);
        Span<double> sums = stackalloc double[Stencil.Size];
        for (int shared = 0; shared < classes.Shared; shared++)
        {
            sums.Clear();
            for (int voxel = 0; voxel < 8; voxel++)
            {
                AddElement(unit, classes.Conductivity(shared, voxel), 7 - voxel, sums);
            }

            Write(sums, table.AsSpan(shared * Stencil.Stride, Stencil.Size));
        }

        if (classes.Own > 0)
        {
            int slabs = (mesh.Nodes.Nz + Slab - 1) / Slab;
            Parallel.For(0, slabs, new ParallelOptions { MaxDegreeOfParallelism = threads }, slab => AssembleOwn(mesh, tensors, classes, unit, table, slab * Slab));
        }

        return new StencilOperator(mesh.Nodes, table, classes.Index);
    }

    /// <summary>The matrix of an undeformed element of conductivity 1 S/m [S].</summary>
    internal static double[] UnitElement(HexMesh mesh)
    {
        Affine map = mesh.Volume.Grid.ToWorld;
        Span<Vec3> corners = stackalloc Vec3[HexElement.Corners];
        for (int c = 0; c < HexElement.Corners; c++)
        {
            corners[c] = map.ApplyLinear(new(c & 1, c >> 1 & 1, c >> 2));
        }

        var unit = new double[HexElement.Entries];
        HexElement.Stiffness(corners, 1.0, null, unit);
        double largest = unit.Max();
        return [.. unit.Select(k => Math.Abs(k) < Rounding * largest ? 0 : k)];
    }

    /// <summary>Adds the row of one corner of an element to a node's 27 sums.</summary>
    private static void AddElement(ReadOnlySpan<double> matrix, double scale, int corner, Span<double> sums)
    {
        int at = Stencil.At(-(corner & 1), -(corner >> 1 & 1), -(corner >> 2));
        for (int other = 0; other < HexElement.Corners; other++)
        {
            sums[at + (other & 1) + 3 * (other >> 1 & 1) + 9 * (other >> 2)] += scale * matrix[HexElement.Corners * corner + other];
        }
    }

    private static void Write(ReadOnlySpan<double> sums, Span<float> row)
    {
        for (int k = 0; k < Stencil.Size; k++)
        {
            row[k] = (float)-sums[k];
        }

        StencilOperator.Close(row);
    }

    private static void AssembleOwn(HexMesh mesh, ConductivityTensors? tensors, NodeClasses classes, double[] unit, float[] table, int from)
    {
        VoxelGrid grid = mesh.Volume.Grid;
        RowGrid nodes = mesh.Nodes;
        int to = Math.Min(nodes.Nz, from + Slab), plane = nodes.Nx * nodes.Ny * Stencil.Size;
        double[][] sums = [new double[plane], new double[plane]];       // rows of the node planes below and above a plane of elements
        Span<double> matrix = stackalloc double[HexElement.Entries];
        for (int k = from - 1; k < to; k++)
        {
            for (int j = 0; k >= 0 && k < grid.Nz && j < grid.Ny; j++)
            {
                for (int i = 0; i < grid.Nx; i++)
                {
                    int voxel = grid.Index(i, j, k);
                    if (mesh.Volume.Cells[voxel] != 0)
                    {
                        AddToOwn(mesh, tensors, classes, unit, (i, j, k), voxel, sums, matrix);
                    }
                }
            }

            if (k >= from)
            {
                WritePlane(nodes, classes, sums[k & 1], table, k);
            }

            Array.Clear(sums[k & 1]);
        }
    }

    private static void AddToOwn(
        HexMesh mesh, ConductivityTensors? tensors, NodeClasses classes, double[] unit, (int I, int J, int K) at, int voxel, double[][] sums, Span<double> matrix)
    {
        RowGrid nodes = mesh.Nodes;
        bool integrated = false;
        double conductivity = mesh.Volume.Tissues[mesh.Volume.Cells[voxel]].Conductivity;
        for (int corner = 0; corner < HexElement.Corners; corner++)
        {
            int y = at.J + (corner >> 1 & 1), z = at.K + (corner >> 2), x = at.I + (corner & 1);
            if (classes.Index[nodes.Base(y, z)!.Value + x] < classes.Shared)
            {
                continue;
            }

            Span<double> row = sums[z & 1].AsSpan((x + nodes.Nx * y) * Stencil.Size, Stencil.Size);
            if (!classes.IsSpecial(voxel))
            {
                AddElement(unit, conductivity, corner, row);
                continue;
            }

            if (!integrated)
            {
                Integrate(mesh, tensors, at, voxel, conductivity, matrix);
                integrated = true;
            }

            AddElement(matrix, 1.0, corner, row);
        }
    }

    private static void Integrate(HexMesh mesh, ConductivityTensors? tensors, (int I, int J, int K) at, int voxel, double conductivity, Span<double> matrix)
    {
        SymmetricTensor? tensor = tensors is not null && tensors.TryGet(voxel, out SymmetricTensor t) ? t : null;
        Span<Vec3> corners = stackalloc Vec3[HexElement.Corners];
        for (int c = 0; c < HexElement.Corners; c++)
        {
            int x = at.I + (c & 1), y = at.J + (c >> 1 & 1), z = at.K + (c >> 2);
            corners[c] = mesh.Position(x, y, z, mesh.Nodes.Base(y, z)!.Value + x);
        }

        HexElement.Stiffness(corners, conductivity, tensor, matrix);
    }

    private static void WritePlane(RowGrid nodes, NodeClasses classes, double[] sums, float[] table, int z)
    {
        for (int y = 0; y < nodes.Ny; y++)
        {
            (int first, int length, int offset) = nodes.Row(y, z);
            for (int n = 0; n < length; n++)
            {
                int row = classes.Index[offset + n];
                if (row >= classes.Shared)
                {
                    Write(sums.AsSpan((first + n + nodes.Nx * y) * Stencil.Size, Stencil.Size), table.AsSpan(row * Stencil.Stride, Stencil.Size));
                }
            }
        }
    }
}
