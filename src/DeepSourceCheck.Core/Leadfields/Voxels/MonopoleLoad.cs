using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Numerics.Multigrid;

namespace DeepSourceCheck.Core.Leadfields.Voxels;

// MonopoleLoad.cs - Saint-Venant's principle: a dipole as currents q_n into the nodes around it.
//   With s_n = (x_n - x_0)/h, h the cube root of a voxel's volume, and the ten monomials m(s) = 1, s_a, s_a s_b (a <= b):
//     least  sum w_n^2 q_n^2 + sum_r (sum_n m_r(s_n) q_n - M_r)^2/lambda_r,   M = 0, e, 0,   w_n^2 = w_0^2 + |s_n|^2
//   that is q_n = m(s_n)' y / w_n^2,  (sum_n m m'/w_n^2 + diag lambda) y = M: ten unknowns however many nodes. Weights are q/h.
//   lambda is minute for the sum and the moment, which hold to rounding, small for the second moments of the full set of 27 nodes, and 1 where nodes are missing.
// Source: [Buchner et al. 1997], [de Munck, Wolters & Clerc 2012] for the moments and the distance weights; the dual form and the hard first moments are ours.

/// <summary>A dipole as monopoles on the nodes around it, correct to second moments.</summary>
/// <remarks>
/// Taken are the nodes within source tissue among the 27 around that such node which is nearest; where they cannot give the moment, those among the 64 of the voxel
/// and its neighbours; then also nodes on the tissue's border; then the element's gradient. See <see cref="DipoleSupport"/>.
/// </remarks>
public sealed class MonopoleLoad : DipoleLoad
{
    private const int Moments = 10;

    // w_0^2: keeps a node that the dipole stands on from taking everything.
    private const double NodeWeight = 0.1;

    private const double HardRidge = 1e-12;

    // Second moments in voxels squared: nearly kept by the full set. Nodes on one side of the dipole could keep them only by large opposed currents: there they may go.
    private const double SoftRidge = 1e-4, OneSidedRidge = 1;

    private const int WholeSet = 27;

    // The moment that the nodes must reproduce: far below the error of discretisation.
    private const double MomentTolerance = 1e-4;

    // Nodes that lie nearly in a plane give a moment across it by large opposed currents, which see other fields than the dipole: largest |q| of a load, which else is about 1.
    private const double LargestShare = 2;

    private readonly double _length;
    private readonly ElementGradientLoad _element;

    /// <param name="tissue">Where dipoles may stand.</param>
    public MonopoleLoad(SourceTissue tissue)
        : base(tissue)
    {
        _length = Math.Cbrt(tissue.Mesh.Volume.Grid.VoxelVolume);
        _element = new(tissue);
    }

    /// <inheritdoc/>
    public override int Place(Vec3 position, Span<int> nodes, Span<Vec3> weights, out DipoleSupport support)
    {
        (int i, int j, int k) = Tissue.Mesh.Volume.Grid.Voxel(Tissue.VoxelAt(position));
        Span<Vec3> offsets = stackalloc Vec3[MostNodes];

        (int X, int Y, int Z)? centre = Nearest(position, (i, j, k), 0, within: true) ?? Nearest(position, (i, j, k), 1, within: true);
        if (centre is { } at)
        {
            int count = Collect(position, (at.X - 1, at.Y - 1, at.Z - 1), 3, within: true, nodes, offsets);
            if (Solve(offsets[..count], weights))
            {
                support = count == WholeSet ? DipoleSupport.Whole : DipoleSupport.Partial;
                return count;
            }

            count = Collect(position, (i - 1, j - 1, k - 1), 4, within: true, nodes, offsets);
            if (Solve(offsets[..count], weights))
            {
                support = DipoleSupport.Partial;
                return count;
            }
        }

        (int X, int Y, int Z) corner = Nearest(position, (i, j, k), 0, within: false)!.Value;
        int touching = Collect(position, (corner.X - 1, corner.Y - 1, corner.Z - 1), 3, within: false, nodes, offsets);
        if (Solve(offsets[..touching], weights))
        {
            support = DipoleSupport.Border;
            return touching;
        }

        touching = _element.Place(position, nodes, weights, out _);
        support = DipoleSupport.Element;
        return touching;
    }

    /// <inheritdoc/>
    public override DipoleSupport SupportAt(Vec3 position)
    {
        // Well inside tissue, where most dipoles are, the nodes need only be seen: 27 around the dipole always give the moment.
        (int, int, int) voxel = Tissue.Mesh.Volume.Grid.Voxel(Tissue.VoxelAt(position));
        return (Nearest(position, voxel, 0, within: true) ?? Nearest(position, voxel, 1, within: true)) is { } at && HasWholeSet(at) ? DipoleSupport.Whole : base.SupportAt(position);
    }

    private bool HasWholeSet((int X, int Y, int Z) centre)
    {
        RowGrid grid = Tissue.Mesh.Nodes;
        for (int n = 0; n < WholeSet; n++)
        {
            int node = grid.IndexOf(centre.X - 1 + n % 3, centre.Y - 1 + n / 3 % 3, centre.Z - 1 + n / 9);
            if (node < 0 || !Tissue.IsWithin(node))
            {
                return false;
            }
        }

        return true;
    }

    /// <summary>The nearest node among the corners of a voxel, or of the voxel and its neighbours, that lies within source tissue or touches it.</summary>
    private (int X, int Y, int Z)? Nearest(Vec3 position, (int I, int J, int K) voxel, int margin, bool within)
    {
        RowGrid grid = Tissue.Mesh.Nodes;
        (int, int, int)? best = null;
        double least = double.PositiveInfinity;
        for (int z = voxel.K - margin; z <= voxel.K + 1 + margin; z++)
        {
            for (int y = voxel.J - margin; y <= voxel.J + 1 + margin; y++)
            {
                for (int x = voxel.I - margin; x <= voxel.I + 1 + margin; x++)
                {
                    int node = grid.IndexOf(x, y, z);
                    if (node >= 0 && (within ? Tissue.IsWithin(node) : Tissue.Touches(node)))
                    {
                        Vec3 offset = Tissue.Mesh.Position(x, y, z, node) - position;
                        double square = Vec3.Dot(offset, offset);
                        if (square < least)
                        {
                            (least, best) = (square, (x, y, z));
                        }
                    }
                }
            }
        }

        return best;
    }

    private int Collect(Vec3 position, (int X, int Y, int Z) first, int side, bool within, Span<int> nodes, Span<Vec3> offsets)
    {
        RowGrid grid = Tissue.Mesh.Nodes;
        int count = 0;
        for (int z = first.Z; z < first.Z + side; z++)
        {
            for (int y = first.Y; y < first.Y + side; y++)
            {
                for (int x = first.X; x < first.X + side; x++)
                {
                    int node = grid.IndexOf(x, y, z);
                    if (node >= 0 && (within ? Tissue.IsWithin(node) : Tissue.Touches(node)))
                    {
                        nodes[count] = node;
                        offsets[count++] = (Tissue.Mesh.Position(x, y, z, node) - position) / _length;
                    }
                }
            }
        }

        return count;
    }

    /// <summary>Weights [1/m] for the three axes; false where the nodes do not reproduce the moment, or only by currents out of proportion.</summary>
    private bool Solve(ReadOnlySpan<Vec3> offsets, Span<Vec3> weights)
    {
        if (offsets.Length < 4)
        {
            return false;
        }

        Span<double> matrix = stackalloc double[Moments * Moments], m = stackalloc double[Moments], right = stackalloc double[3 * Moments];
        matrix.Clear();
        foreach (Vec3 s in offsets)
        {
            Monomials(s, m);
            double share = 1 / (NodeWeight + Vec3.Dot(s, s));
            for (int r = 0; r < Moments; r++)
            {
                double scaled = share * m[r];
                for (int c = 0; c <= r; c++)
                {
                    matrix[r * Moments + c] += scaled * m[c];
                }
            }
        }

        for (int r = 0; r < Moments; r++)
        {
            matrix[r * (Moments + 1)] += r < 4 ? HardRidge : offsets.Length == WholeSet ? SoftRidge : OneSidedRidge;
        }

        Factor(matrix);
        right.Clear();
        for (int axis = 0; axis < 3; axis++)
        {
            Span<double> y = right.Slice(axis * Moments, Moments);
            y[1 + axis] = 1;
            Substitute(matrix, y);
        }

        Vec3 sum = Vec3.Zero, alongX = Vec3.Zero, alongY = Vec3.Zero, alongZ = Vec3.Zero;
        for (int n = 0; n < offsets.Length; n++)
        {
            Vec3 s = offsets[n];
            Monomials(s, m);
            double share = 1 / (NodeWeight + Vec3.Dot(s, s));
            double x = 0, y = 0, z = 0;
            for (int r = 0; r < Moments; r++)
            {
                x += m[r] * right[r];
                y += m[r] * right[Moments + r];
                z += m[r] * right[2 * Moments + r];
            }

            Vec3 q = share * new Vec3(x, y, z);
            if (!(q.Norm <= LargestShare))
            {
                return false;
            }

            weights[n] = q / _length;
            sum += q;
            alongX += s.X * q;
            alongY += s.Y * q;
            alongZ += s.Z * q;
        }

        double error = Math.Max(Math.Max(sum.Norm, (alongX - new Vec3(1, 0, 0)).Norm), Math.Max((alongY - new Vec3(0, 1, 0)).Norm, (alongZ - new Vec3(0, 0, 1)).Norm));
        return error < MomentTolerance;
    }

    private static void Monomials(Vec3 s, Span<double> m)
    {
        m[0] = 1;
        (m[1], m[2], m[3]) = s;
        m[4] = s.X * s.X;
        m[5] = s.Y * s.Y;
        m[6] = s.Z * s.Z;
        m[7] = s.X * s.Y;
        m[8] = s.X * s.Z;
        m[9] = s.Y * s.Z;
    }

    // Cholesky's factor in place, lower triangle; the ridge keeps every pivot positive.
    private static void Factor(Span<double> a)
    {
        for (int c = 0; c < Moments; c++)
        {
            for (int r = c; r < Moments; r++)
            {
                double sum = a[r * Moments + c];
                for (int k = 0; k < c; k++)
                {
                    sum -= a[r * Moments + k] * a[c * Moments + k];
                }

                a[r * Moments + c] = r == c ? Math.Sqrt(Math.Max(sum, HardRidge * HardRidge)) : sum / a[c * (Moments + 1)];
            }
        }
    }

    private static void Substitute(ReadOnlySpan<double> factor, Span<double> y)
    {
        for (int r = 0; r < Moments; r++)
        {
            for (int c = 0; c < r; c++)
            {
                y[r] -= factor[r * Moments + c] * y[c];
            }

            y[r] /= factor[r * (Moments + 1)];
        }

        for (int r = Moments - 1; r >= 0; r--)
        {
            for (int c = r + 1; c < Moments; c++)
            {
                y[r] -= factor[c * Moments + r] * y[c];
            }

            y[r] /= factor[r * (Moments + 1)];
        }
    }
}
