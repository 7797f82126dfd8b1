using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;

namespace DeepSourceCheck.Core.Leadfields.Voxels;

// HexElement.cs - stiffness of one trilinear hexahedron.
//   K_ab = int grad N_a . sigma grad N_b dV,  2 x 2 x 2 Gauss points;  grad N = J^-T grad_ref N,  J = d x / d xi,  xi in [0, 1]^3
//   Corner c lies at (c and 1, c / 2 and 1, c / 4). Exact for parallelepipeds; for moved nodes constants have no energy and linear fields their exact flux.
// Source: [Hughes 1987], chapter 3.

/// <summary>Stiffness matrices of trilinear hexahedra [S].</summary>
internal static class HexElement
{
    /// <summary>Corners.</summary>
    public const int Corners = 8;

    /// <summary>Entries of a matrix.</summary>
    public const int Entries = Corners * Corners;

    /// <summary>Gradients by xi of the shape functions at the Gauss points: [point][corner].</summary>
    private static readonly Vec3[] Gradients = MakeGradients();

    /// <summary>Value of a shape function, without unit.</summary>
    public static double Shape(int corner, Vec3 xi) =>
        ((corner & 1) == 0 ? 1 - xi.X : xi.X) * ((corner & 2) == 0 ? 1 - xi.Y : xi.Y) * ((corner & 4) == 0 ? 1 - xi.Z : xi.Z);

    /// <summary>Gradient by xi of a shape function, without unit.</summary>
    public static Vec3 Gradient(int corner, Vec3 xi)
    {
        double x = (corner & 1) == 0 ? 1 - xi.X : xi.X, y = (corner & 2) == 0 ? 1 - xi.Y : xi.Y, z = (corner & 4) == 0 ? 1 - xi.Z : xi.Z;
        double sx = (corner & 1) == 0 ? -1 : 1, sy = (corner & 2) == 0 ? -1 : 1, sz = (corner & 4) == 0 ? -1 : 1;
        return new(sx * y * z, x * sy * z, x * y * sz);
    }

    /// <summary>A Gauss point of the 2 x 2 x 2 rule; each weighs 1/8.</summary>
    public static Vec3 GaussPoint(int point)
    {
        double low = 0.5 - 0.5 / Math.Sqrt(3), high = 1 - low;
        return new((point & 1) == 0 ? low : high, (point & 2) == 0 ? low : high, (point & 4) == 0 ? low : high);
    }

    /// <summary>The matrix of one element [S].</summary>
    /// <param name="corners">Places of the eight corners [m].</param>
    /// <param name="conductivity">Conductivity [S/m] where <paramref name="tensor"/> is null.</param>
    /// <param name="tensor">Conductivity tensor in world axes [S/m], or null.</param>
    /// <param name="matrix">64 entries, overwritten.</param>
    public static void Stiffness(ReadOnlySpan<Vec3> corners, double conductivity, SymmetricTensor? tensor, Span<double> matrix)
    {
        matrix.Clear();
        Span<Vec3> gradient = stackalloc Vec3[Corners];
        Span<Vec3> flux = stackalloc Vec3[Corners];
        for (int point = 0; point < 8; point++)
        {
            ReadOnlySpan<Vec3> reference = Gradients.AsSpan(Corners * point, Corners);
            Jacobian(corners, reference, out Vec3 c0, out Vec3 c1, out Vec3 c2);
            Vec3 r0 = Vec3.Cross(c1, c2), r1 = Vec3.Cross(c2, c0), r2 = Vec3.Cross(c0, c1);
            double determinant = Vec3.Dot(c0, r0);
            double weight = Math.Abs(determinant) / 8 / (determinant * determinant);
            for (int a = 0; a < Corners; a++)
            {
                Vec3 g = reference[a];
                gradient[a] = g.X * r0 + g.Y * r1 + g.Z * r2;
                flux[a] = weight * (tensor is { } t ? t.Apply(gradient[a]) : conductivity * gradient[a]);
            }

            for (int a = 0; a < Corners; a++)
            {
                for (int b = 0; b <= a; b++)
                {
                    matrix[Corners * a + b] += Vec3.Dot(gradient[a], flux[b]);
                }
            }
        }

        for (int a = 0; a < Corners; a++)
        {
            for (int b = 0; b < a; b++)
            {
                matrix[Corners * b + a] = matrix[Corners * a + b];
            }
        }
    }

    /// <summary>The least of the Jacobian's determinants at the corners, where a trilinear map has its extremes along edges, relative to that of the voxel; negative where the element folds.</summary>
    /// <param name="corners">Places of the eight corners [m].</param>
    /// <param name="voxel">Determinant of the voxel's map [m^3], signed.</param>
    public static double LeastDeterminant(ReadOnlySpan<Vec3> corners, double voxel)
    {
        double least = double.PositiveInfinity;
        for (int c = 0; c < Corners; c++)
        {
            // At a corner the columns are the edges that meet there.
            Vec3 x = corners[c | 1] - corners[c & ~1], y = corners[c | 2] - corners[c & ~2], z = corners[c | 4] - corners[c & ~4];
            least = Math.Min(least, Vec3.Dot(x, Vec3.Cross(y, z)) / voxel);
        }

        for (int point = 0; point < 8; point++)
        {
            Jacobian(corners, Gradients.AsSpan(Corners * point, Corners), out Vec3 c0, out Vec3 c1, out Vec3 c2);
            least = Math.Min(least, Vec3.Dot(c0, Vec3.Cross(c1, c2)) / voxel);
        }

        return least;
    }

    private static void Jacobian(ReadOnlySpan<Vec3> corners, ReadOnlySpan<Vec3> reference, out Vec3 c0, out Vec3 c1, out Vec3 c2)
    {
        (c0, c1, c2) = (Vec3.Zero, Vec3.Zero, Vec3.Zero);
        for (int a = 0; a < Corners; a++)
        {
            c0 += reference[a].X * corners[a];
            c1 += reference[a].Y * corners[a];
            c2 += reference[a].Z * corners[a];
        }
    }

    private static Vec3[] MakeGradients()
    {
        var gradients = new Vec3[8 * Corners];
        for (int n = 0; n < gradients.Length; n++)
        {
            gradients[n] = Gradient(n % Corners, GaussPoint(n / Corners));
        }

        return gradients;
    }
}
