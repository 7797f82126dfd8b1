using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;

namespace DeepSourceCheck.Core.Leadfields.Voxels;

// InterfaceFaces.cs - the faces across which the isotropic conductivity jumps, with their Gauss points.
//   Face between elements c and c', n from c to c':  sum over 2 x 2 points q of  w_q (x_v x x_w)_q (sigma_c - sigma_c') psi_j(q) . g(x_q).
//   Air and elements with a tensor count as 0: the former have no current, the latter are integrated over their volume.

/// <summary>Faces between elements of different conductivity, the head's surface included: where the surface form of a coil's load lives.</summary>
/// <remarks>Single precision, places relative to <see cref="Origin"/>. Immutable.</remarks>
internal sealed class InterfaceFaces
{
    /// <summary>Gauss points of a face, and its corners.</summary>
    public const int PerFace = 4;

    /// <summary>Numbers of a Gauss point: place (3), weighted normal times jump of conductivity (3).</summary>
    public const int Stride = 6;

    /// <param name="mesh">Elements.</param>
    /// <param name="tensors">Tensors of some voxels, or null.</param>
    public InterfaceFaces(HexMesh mesh, ConductivityTensors? tensors)
    {
        VoxelGrid grid = mesh.Volume.Grid;
        Origin = grid.ToWorld.Apply(new((grid.Nx - 1) / 2.0, (grid.Ny - 1) / 2.0, (grid.Nz - 1) / 2.0));
        double handedness = Math.Sign(grid.ToWorld.Determinant);
        double[] conductivities = [.. mesh.Volume.Tissues.Select((tissue, index) => index == 0 ? 0 : tissue.Conductivity)];
        List<int> nodes = [];
        List<float> points = [];
        for (int k = -1; k < grid.Nz; k++)
        {
            for (int j = -1; j < grid.Ny; j++)
            {
                for (int i = -1; i < grid.Nx; i++)
                {
                    double here = Conductivity(i, j, k);
                    for (int axis = 0; axis < 3; axis++)
                    {
                        double jump = here - Conductivity(i + (axis == 0 ? 1 : 0), j + (axis == 1 ? 1 : 0), k + (axis == 2 ? 1 : 0));
                        if (jump != 0)
                        {
                            Append(mesh, i, j, k, axis, jump * handedness, nodes, points);
                        }
                    }
                }
            }
        }

        Nodes = [.. nodes];
        Points = [.. points];
        Touched = [.. Nodes.Distinct().Order()];
        ConductorPieces pieces = new(mesh);
        Pieces = pieces.Count;
        PieceOfFace = [.. Enumerable.Range(0, Count).Select(face => pieces.Of(Nodes[face * PerFace]))];
        PieceOfTouched = [.. Touched.Select(pieces.Of)];

        double Conductivity(int i, int j, int k)
        {
            if ((uint)i >= (uint)grid.Nx || (uint)j >= (uint)grid.Ny || (uint)k >= (uint)grid.Nz)
            {
                return 0;
            }

            int cell = grid.Index(i, j, k);
            return tensors is not null && tensors.TryGet(cell, out _) ? 0 : conductivities[mesh.Volume.Cells[cell]];
        }
    }

    /// <summary>Place that coordinates are relative to [m].</summary>
    public Vec3 Origin { get; }

    /// <summary>Number of faces.</summary>
    public int Count => Nodes.Length / PerFace;

    /// <summary>[face][corner]: corner b + 2 c at natural coordinates (b, c) of the face.</summary>
    public int[] Nodes { get; }

    /// <summary>[face][Gauss point][place [m], normal [m^2 S/m]]; point b + 2 c at the lower or upper coordinate.</summary>
    public float[] Points { get; }

    /// <summary>Nodes of any face, ascending.</summary>
    public int[] Touched { get; }

    /// <summary>Number of unconnected pieces of the conductor.</summary>
    public int Pieces { get; }

    /// <summary>Piece of each face.</summary>
    public int[] PieceOfFace { get; }

    /// <summary>Piece of each of the <see cref="Touched"/> nodes.</summary>
    public int[] PieceOfTouched { get; }

    // The upper face of voxel (i, j, k) along an axis a; its own axes b and c follow in cyclic order, so that x_b x x_c points outward in a right-handed frame.
    private void Append(HexMesh mesh, int i, int j, int k, int axis, double jump, List<int> nodes, List<float> points)
    {
        Span<Vec3> corners = stackalloc Vec3[PerFace];
        int b = (axis + 1) % 3, c = (axis + 2) % 3;
        for (int corner = 0; corner < PerFace; corner++)
        {
            Span<int> at = [i, j, k];
            at[axis]++;
            at[b] += corner & 1;
            at[c] += corner >> 1;
            int node = mesh.Nodes.IndexOf(at[0], at[1], at[2]);
            nodes.Add(node);
            corners[corner] = mesh.Position(at[0], at[1], at[2], node) - Origin;
        }

        for (int q = 0; q < PerFace; q++)
        {
            double u = (q & 1) == 0 ? TrilinearHexahedron.GaussLow : TrilinearHexahedron.GaussHigh;
            double v = (q & 2) == 0 ? TrilinearHexahedron.GaussLow : TrilinearHexahedron.GaussHigh;
            Vec3 low = (1 - u) * corners[0] + u * corners[1], high = (1 - u) * corners[2] + u * corners[3];
            Vec3 alongU = (1 - v) * (corners[1] - corners[0]) + v * (corners[3] - corners[2]);
            Vec3 place = (1 - v) * low + v * high, normal = jump / PerFace * Vec3.Cross(alongU, high - low);
            points.AddRange([(float)place.X, (float)place.Y, (float)place.Z, (float)normal.X, (float)normal.Y, (float)normal.Z]);
        }
    }
}
