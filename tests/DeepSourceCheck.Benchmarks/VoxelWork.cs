using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Leadfields.Voxels;
using DeepSourceCheck.Core.Numerics.Multigrid;

namespace DeepSourceCheck.Benchmarks;

/// <summary>What the voxel solver is timed on: a layered sphere as a labelled volume, 64 pairs of points and 291 coils of a magnetometer helmet.</summary>
internal sealed class VoxelWork : ILoadBlocks
{
    /// <summary>Pairs of points: electrodes against a reference.</summary>
    public const int Pairs = 64;

    /// <summary>Coils: dense loads, smooth within a tissue.</summary>
    public const int Dense = 291;

    private const double Scalp = 0.092;
    private readonly Vector3[] _nodes;
    private readonly bool[] _live;
    private readonly int[] _electrodes, _rows;
    private readonly HexMesh _mesh;

    /// <param name="mesh">The sphere's mesh.</param>
    public VoxelWork(HexMesh mesh)
    {
        RowGrid grid = mesh.Nodes;
        _mesh = mesh;
        _rows = new int[grid.Ny * grid.Nz];
        _nodes = new Vector3[grid.Count];
        _live = new bool[grid.Count];
        VoxelGrid voxels = mesh.Volume.Grid;
        for (int voxel = 0; voxel < voxels.Count; voxel++)
        {
            if (mesh.Volume.Cells[voxel] != 0)
            {
                (int i, int j, int k) = voxels.Voxel(voxel);
                for (int c = 0; c < 8; c++)
                {
                    _live[grid.IndexOf(i + (c & 1), j + (c >> 1 & 1), k + (c >> 2))] = true;
                }
            }
        }

        for (int z = 0; z < grid.Nz; z++)
        {
            for (int y = 0; y < grid.Ny; y++)
            {
                (int first, int length, int offset) = grid.Row(y, z);
                _rows[y + grid.Ny * z] = offset - first;
                for (int n = 0; n < length; n++)
                {
                    // From the plain places: both grids and both programs get the same loads.
                    Vec3 place = voxels.ToWorld.Apply(new(first + n - 0.5, y - 0.5, z - 0.5));
                    _nodes[offset + n] = new((float)place.X, (float)place.Y, (float)place.Z);
                }
            }
        }

        _electrodes = [.. Enumerable.Range(0, Pairs + 1).Select(k => Nearest(0.97 * Scalp * GoldenSpiral.Point(k, Pairs + 1, -0.5)))];
    }

    /// <inheritdoc/>
    public int Count => Pairs + Dense;

    /// <summary>The layered sphere 92/86/80/78 mm, 0.43/skull/1.79/0.33 S/m, cubes of an edge [m].</summary>
    public static TissueVolume Sphere(double voxel, double skull)
    {
        double[] radii = [0.092, 0.086, 0.080, 0.078];
        int half = (int)Math.Ceiling(radii[0] / voxel) + 1, n = 2 * half;
        double corner = -(half - 0.5) * voxel;
        var grid = new VoxelGrid(n, n, n, new(new(voxel, 0, 0), new(0, voxel, 0), new(0, 0, voxel), new(corner, corner, corner)));
        var cells = new byte[grid.Count];
        for (int v = 0; v < cells.Length; v++)
        {
            (int i, int j, int k) = grid.Voxel(v);
            double radius = grid.Centre(i, j, k).Norm;
            cells[v] = (byte)radii.Count(r => radius < r);
        }

        return new TissueVolume(grid, cells,
        [
            new(0, "air", TissueKind.Air, 0), new(1, "scalp", TissueKind.Scalp, 0.43), new(2, "skull", TissueKind.Skull, skull),
            new(3, "csf", TissueKind.Csf, 1.79), new(4, "brain", TissueKind.Grey, 0.33),
        ]);
    }

    /// <summary>Radial tensors for the brain: 0.65 S/m across the x axis' plane through the centre's ring, a third of it along.</summary>
    public static ConductivityTensors WhiteTensors(TissueVolume volume)
    {
        var has = new ulong[(volume.Grid.Count + 63) / 64];
        List<float> values = [];
        for (int v = 0; v < volume.Grid.Count; v++)
        {
            (int i, int j, int k) = volume.Grid.Voxel(v);
            Vec3 place = volume.Grid.Centre(i, j, k);
            if (place.Norm is < 0.065 and > 0.02)
            {
                // Fibres around the z axis; 9 to 1 along against across, volume kept: (0.14 x 9^(2/3), ...).
                var along = new Vec3(-place.Y, place.X, 0.02);
                along /= along.Norm;
                double across = 0.14 / Math.Cbrt(9), extra = 8 * across;
                has[v >> 6] |= 1UL << v;
                values.AddRange([(float)(across + extra * along.X * along.X), (float)(extra * along.X * along.Y), (float)(across + extra * along.Y * along.Y),
                    (float)(extra * along.X * along.Z), (float)(extra * along.Y * along.Z), (float)(across + extra * along.Z * along.Z)]);
            }
        }

        return new ConductivityTensors(has, [.. values]);
    }

    /// <inheritdoc/>
    public void Fill(int block, Span<float> values)
    {
        values.Clear();
        int first = block * ILoadBlocks.Lanes;
        if (first + ILoadBlocks.Lanes > Pairs)
        {
            Span<float> lanes = stackalloc float[6 * ILoadBlocks.Lanes];
            for (int lane = 0; lane < ILoadBlocks.Lanes; lane++)
            {
                int coil = first + lane - Pairs;
                if (coil is >= 0 and < Dense)
                {
                    Vec3 axis = GoldenSpiral.Point(coil, Dense, -0.4);
                    for (int k = 0; k < 3; k++)
                    {
                        lanes[k * ILoadBlocks.Lanes + lane] = (float)(0.12 * axis[k]);
                        lanes[(3 + k) * ILoadBlocks.Lanes + lane] = (float)axis[(k + 1) % 3];
                    }
                }
                else
                {
                    lanes[lane] = 1;        // far from every element, without moment
                }
            }

            AddCoils(values, lanes);
        }

        for (int lane = 0; lane < ILoadBlocks.Lanes && first + lane < Pairs; lane++)
        {
            values[_electrodes[first + lane] * ILoadBlocks.Lanes + lane] += 1;
            values[_electrodes[Pairs] * ILoadBlocks.Lanes + lane] -= 1;
        }
    }

    /// <summary>Coils at R with moment m: sigma (R - r) x m / |R - r|^3 in the middle of each element, spread over its corners with their gradients there.</summary>
    private void AddCoils(Span<float> values, ReadOnlySpan<float> lanes)
    {
        Span<Vector512<float>> nodes = MemoryMarshal.Cast<float, Vector512<float>>(values);
        ReadOnlySpan<Vector512<float>> coil = MemoryMarshal.Cast<float, Vector512<float>>(lanes);
        (Vector512<float> px, Vector512<float> py, Vector512<float> pz, Vector512<float> mx, Vector512<float> my, Vector512<float> mz) = (coil[0], coil[1], coil[2], coil[3], coil[4], coil[5]);
        VoxelGrid grid = _mesh.Volume.Grid;
        var edge = (float)grid.ToWorld.Row0.X;
        for (int k = 0; k < grid.Nz; k++)
        {
            for (int j = 0; j < grid.Ny; j++)
            {
                for (int i = 0; i < grid.Nx; i++)
                {
                    byte tissue = _mesh.Volume.Cells[grid.Index(i, j, k)];
                    if (tissue == 0)
                    {
                        continue;
                    }

                    Vec3 centre = grid.Centre(i, j, k);
                    Vector512<float> x = px - Vector512.Create((float)centre.X), y = py - Vector512.Create((float)centre.Y), z = pz - Vector512.Create((float)centre.Z);
                    Vector512<float> square = x * x + y * y + z * z;
                    Vector512<float> scale = Vector512.Create((float)(_mesh.Volume.Tissues[tissue].Conductivity * edge * edge / 4)) / (square * Vector512.Sqrt(square));
                    Vector512<float> fx = scale * (y * mz - z * my), fy = scale * (z * mx - x * mz), fz = scale * (x * my - y * mx);
                    for (int line = 0; line < 4; line++)
                    {
                        int node = _rows[j + (line & 1) + _mesh.Nodes.Ny * (k + (line >> 1))] + i;
                        Vector512<float> across = ((line & 1) == 0 ? -fy : fy) + ((line & 2) == 0 ? -fz : fz);
                        nodes[node] += across - fx;
                        nodes[node + 1] += across + fx;
                    }
                }
            }
        }
    }

    private int Nearest(Vec3 place)
    {
        (int at, double least) = (0, double.PositiveInfinity);
        for (int n = 0; n < _nodes.Length; n++)
        {
            double distance = (new Vec3(_nodes[n].X, _nodes[n].Y, _nodes[n].Z) - place).Norm;
            if (_live[n] && distance < least)
            {
                (at, least) = (n, distance);
            }
        }

        return at;
    }

    private readonly record struct Vector3(float X, float Y, float Z);
}
