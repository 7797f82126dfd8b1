using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Leadfields.Spheres;

// MegSphere.cs - magnetic field of a current dipole in a spherically symmetric conductor.
//   r = coil point, r0 = dipole, both from the centre; a = r - r0, F = |a| (|r||a| + r.a)
//   grad F = A r - B r0,  B = |a| + 2|r| + a.r/|a|,  A = B + |a|^2/|r| + |a|
//   B(r) = mu0/(4 pi F^2) [ F (Q x r0) - ((Q x r0).r) grad F ]
//   A channel with point weights w and axes k therefore reads Q . (r0 x H),
//     H = mu0/(4 pi) sum w [ k/F - r (k.grad F)/F^2 ]
//   The vector product with r0 comes last: exact zeros at the centre, full relative precision near it, and rows orthogonal to r0 to rounding.
// Source: [Sarvas 1987] eq. 25.

/// <summary>MEG leadfield outside a spherical conductor: eight dipoles per vector.</summary>
/// <remarks>
/// Quasi-static; independent of the conductivity profile; zero for a radial dipole. Output T/(A m), or T/m/(A m) where the shares are per metre.
/// </remarks>
public sealed class MegSphere
{
    private const int Lanes = LeadfieldBlock.Lanes;

    /// <summary>Doubles a point takes in the table: r, |r|, 1/|r|, weighted axis, weighted axis . r.</summary>
    private const int Stride = 9;

    private readonly Vec3 _centre;
    private readonly double[] _points;
    private readonly int[] _firstPoint;

    /// <summary>Tabulates the coil points.</summary>
    /// <param name="centre">Centre of the sphere [m].</param>
    /// <param name="channels">Channels; every point must lie outside the conductor (see <see cref="SphereLeadfield.CheckCoils"/>).</param>
    public MegSphere(Vec3 centre, IReadOnlyList<MegChannel> channels)
    {
        _centre = centre;
        _firstPoint = new int[channels.Count + 1];
        for (int row = 0; row < channels.Count; row++)
        {
            _firstPoint[row + 1] = _firstPoint[row] + channels[row].Points.Count;
        }

        _points = new double[_firstPoint[^1] * Stride];
        int at = 0;
        foreach (CoilPoint point in channels.SelectMany(channel => channel.Points))
        {
            Vec3 r = point.Position - centre;
            Vec3 axis = point.Axis * (point.Share * Si.Mu0Over4Pi);
            (_points[at], _points[at + 1], _points[at + 2]) = r;
            _points[at + 3] = r.Norm;
            _points[at + 4] = 1.0 / r.Norm;
            (_points[at + 5], _points[at + 6], _points[at + 7]) = axis;
            _points[at + 8] = Vec3.Dot(axis, r);
            at += Stride;
        }
    }

    /// <summary>Number of channels.</summary>
    public int Rows => _firstPoint.Length - 1;

    /// <summary>Number of integration points of all channels.</summary>
    public int Points => _firstPoint[^1];

    /// <summary>Overwrites the block's MEG values [T/(A m) or T/m/(A m)].</summary>
    public void Fill(LeadfieldBlock block)
    {
        Span<double> lanes = stackalloc double[3 * Lanes];
        for (int lane = 0; lane < Lanes; lane++)
        {
            (lanes[lane], lanes[Lanes + lane], lanes[2 * Lanes + lane]) = block.Positions[lane] - _centre;
        }

        Vector512<double> x = Vector512.Create<double>((ReadOnlySpan<double>)lanes), y = Vector512.Create<double>(lanes[Lanes..]), z = Vector512.Create<double>(lanes[(2 * Lanes)..]);
        ref double table = ref MemoryMarshal.GetArrayDataReference(_points);
        for (int row = 0; row < Rows; row++)
        {
            Vector512<double> hx = Vector512<double>.Zero, hy = hx, hz = hx;
            for (int k = _firstPoint[row]; k < _firstPoint[row + 1]; k++)
            {
                AddPoint(ref Unsafe.Add(ref table, k * Stride), x, y, z, ref hx, ref hy, ref hz);
            }

            int at = LeadfieldBlock.At(row, 0);
            DifferenceOfProducts(y, hz, z, hy).CopyTo(block.Meg, at);
            DifferenceOfProducts(z, hx, x, hz).CopyTo(block.Meg, at + Lanes);
            DifferenceOfProducts(x, hy, y, hx).CopyTo(block.Meg, at + 2 * Lanes);
        }
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector512<double> Fma(Vector512<double> a, Vector512<double> b, Vector512<double> c) => Vector512.MultiplyAddEstimate(a, b, c);

    /// <summary>H += k/F - r (k.grad F)/F^2 for one coil point.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static void AddPoint(
        ref double point, Vector512<double> x, Vector512<double> y, Vector512<double> z,
        ref Vector512<double> hx, ref Vector512<double> hy, ref Vector512<double> hz)
    {
        Vector512<double> rx = Vector512.Create(point), ry = Vector512.Create(Unsafe.Add(ref point, 1)), rz = Vector512.Create(Unsafe.Add(ref point, 2));
        Vector512<double> r = Vector512.Create(Unsafe.Add(ref point, 3)), oneOverR = Vector512.Create(Unsafe.Add(ref point, 4));
        Vector512<double> kx = Vector512.Create(Unsafe.Add(ref point, 5)), ky = Vector512.Create(Unsafe.Add(ref point, 6)), kz = Vector512.Create(Unsafe.Add(ref point, 7));
        Vector512<double> kr = Vector512.Create(Unsafe.Add(ref point, 8));

        Vector512<double> ax = rx - x, ay = ry - y, az = rz - z;
        Vector512<double> a2 = Fma(ax, ax, Fma(ay, ay, az * az));
        Vector512<double> ar = Fma(ax, rx, Fma(ay, ry, az * rz));
        Vector512<double> k0 = Fma(kx, x, Fma(ky, y, kz * z));
        Vector512<double> a = Vector512.Sqrt(a2);
        Vector512<double> m = Fma(r, a, ar);
        Vector512<double> inverseF = Vector512<double>.One / (a * m);
        Vector512<double> b = Fma(ar, m * inverseF, Fma(Vector512.Create(2.0), r, a)); // a.r/|a| = a.r m/F
        Vector512<double> alpha = Fma(a2, oneOverR, b + a);
        Vector512<double> gradient = alpha * kr - b * k0;
        Vector512<double> onR = gradient * inverseF * inverseF;
        hx += Fma(inverseF, kx, -(onR * rx));
        hy += Fma(inverseF, ky, -(onR * ry));
        hz += Fma(inverseF, kz, -(onR * rz));
    }

    /// <summary>a b - c d to about one unit in the last place of the result (Kahan's scheme): keeps every row orthogonal to r0.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector512<double> DifferenceOfProducts(Vector512<double> a, Vector512<double> b, Vector512<double> c, Vector512<double> d)
    {
        Vector512<double> cd = c * d;
        Vector512<double> error = Vector512.FusedMultiplyAdd(-c, d, cd);
        return Vector512.FusedMultiplyAdd(a, b, -cd) + error;
    }
}
