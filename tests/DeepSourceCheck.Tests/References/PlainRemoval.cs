using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Sensors;

using MathNet.Numerics.LinearAlgebra;

namespace DeepSourceCheck.Tests.References;

/// <summary>The slow twin of the removal of the room's terms: dense matrices, a library's singular value decomposition, terms as gradients taken numerically.</summary>
internal static class PlainRemoval
{
    // The regular solid harmonics of degrees 1 and 2, as potentials.
    private static readonly Func<Vec3, double>[] Potentials =
    [
        r => r.X, r => r.Y, r => r.Z, r => r.X * r.Y, r => r.Y * r.Z, r => r.X * r.Z, r => r.X * r.X - r.Y * r.Y, r => 2 * r.Z * r.Z - r.X * r.X - r.Y * r.Y,
    ];

    /// <summary>What each channel reads of each harmonic: central differences along the axis, exact for polynomials of second degree.</summary>
    public static Matrix<double> Terms(IReadOnlyList<MegChannel> channels, Vec3 middle)
    {
        const double step = 0.01;
        return Matrix<double>.Build.Dense(channels.Count, Potentials.Length, (k, t) => channels[k].Points.Sum(p =>
            p.Share * (Potentials[t](p.Position + step * p.Axis - middle) - Potentials[t](p.Position - step * p.Axis - middle)) / (2 * step)));
    }

    /// <summary>P = D (I - U U') D^-1, U the left singular vectors of D^-1 T whose singular values are above rounding.</summary>
    public static Matrix<double> Projector(IReadOnlyList<MegChannel> channels, IReadOnlyList<double> scale)
    {
        int m = channels.Count;
        Matrix<double> d = Matrix<double>.Build.DenseOfDiagonalArray([.. scale]);
        // Any centre will do: moving it mixes homogeneous fields into gradients, and the span stays. Columns are brought to one size first.
        Matrix<double> terms = (d.Inverse() * Terms(channels, Vec3.Zero)).NormalizeColumns(2);
        for (int c = 0; c < terms.ColumnCount; c++)
        {
            if (!terms.Column(c).All(double.IsFinite))
            {
                terms.ClearColumn(c);
            }
        }

        var svd = terms.Svd();
        int rank = svd.S.Count(s => s > 1e-9 * svd.S[0]);
        Matrix<double> u = svd.U.SubMatrix(0, m, 0, rank);
        return d * (Matrix<double>.Build.DenseIdentity(m) - u * u.Transpose()) * d.Inverse();
    }
}
