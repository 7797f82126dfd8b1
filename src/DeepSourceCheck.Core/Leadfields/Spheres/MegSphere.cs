using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Numerics;
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

        switch (LaneWidth.Lanes)
        {
            case 8:
                Fill<EightLanes>(block.Meg, lanes);
                break;
            case 4:
                Fill<FourLanes>(block.Meg, lanes);
                break;
            default:
                Fill<TwoLanes>(block.Meg, lanes);
                break;
        }
    }

    /// <summary>Fills all eight lanes, as many at a time as a register holds.</summary>
    /// <param name="meg">[row][axis][lane], overwritten [T/(A m) or T/m/(A m)].</param>
    /// <param name="positions">Dipoles from the centre, [axis][lane] [m].</param>
    internal void Fill<T>(double[] meg, ReadOnlySpan<double> positions)
        where T : struct, ILaneVector<T>
    {
        ref double position = ref MemoryMarshal.GetReference(positions);
        ref double table = ref MemoryMarshal.GetArrayDataReference(_points);
        for (int lane = 0; lane < Lanes; lane += T.Count)
        {
            nuint at = (nuint)lane;
            T x = T.Load(ref position, at), y = T.Load(ref position, at + Lanes), z = T.Load(ref position, at + 2 * Lanes);
            for (int row = 0; row < Rows; row++)
            {
                T hx = default, hy = default, hz = default;
                for (int k = _firstPoint[row]; k < _firstPoint[row + 1]; k++)
                {
                    AddPoint(ref Unsafe.Add(ref table, k * Stride), x, y, z, ref hx, ref hy, ref hz);
                }

                ref double to = ref meg[LeadfieldBlock.At(row, 0) + lane];
                DifferenceOfProducts(y, hz, z, hy).Store(ref to, 0);
                DifferenceOfProducts(z, hx, x, hz).Store(ref to, Lanes);
                DifferenceOfProducts(x, hy, y, hx).Store(ref to, 2 * Lanes);
            }
        }
    }

    /// <summary>H += k/F - r (k.grad F)/F^2 for one coil point.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static void AddPoint<T>(ref double point, T x, T y, T z, ref T hx, ref T hy, ref T hz)
        where T : struct, ILaneVector<T>
    {
        T rx = T.All(point), ry = T.All(Unsafe.Add(ref point, 1)), rz = T.All(Unsafe.Add(ref point, 2));
        T r = T.All(Unsafe.Add(ref point, 3)), oneOverR = T.All(Unsafe.Add(ref point, 4));
        T kx = T.All(Unsafe.Add(ref point, 5)), ky = T.All(Unsafe.Add(ref point, 6)), kz = T.All(Unsafe.Add(ref point, 7));
        T kr = T.All(Unsafe.Add(ref point, 8));

        T ax = rx - x, ay = ry - y, az = rz - z;
        T a2 = T.MultiplyAdd(ax, ax, T.MultiplyAdd(ay, ay, az * az));
        T ar = T.MultiplyAdd(ax, rx, T.MultiplyAdd(ay, ry, az * rz));
        T k0 = T.MultiplyAdd(kx, x, T.MultiplyAdd(ky, y, kz * z));
        T a = T.Sqrt(a2);
        T m = T.MultiplyAdd(r, a, ar);
        T inverseF = T.All(1) / (a * m);
        T b = T.MultiplyAdd(ar, m * inverseF, T.MultiplyAdd(T.All(2), r, a)); // a.r/|a| = a.r m/F
        T alpha = T.MultiplyAdd(a2, oneOverR, b + a);
        T gradient = T.MultiplyAdd(alpha, kr, -(b * k0));
        T onR = -(gradient * inverseF) * inverseF;
        hx = T.MultiplyAdd(onR, rx, T.MultiplyAdd(inverseF, kx, hx));
        hy = T.MultiplyAdd(onR, ry, T.MultiplyAdd(inverseF, ky, hy));
        hz = T.MultiplyAdd(onR, rz, T.MultiplyAdd(inverseF, kz, hz));
    }

    /// <summary>a b - c d to about one unit in the last place of the result (Kahan's scheme): keeps every row orthogonal to r0.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static T DifferenceOfProducts<T>(T a, T b, T c, T d)
        where T : struct, ILaneVector<T>
    {
        T cd = c * d;
        T error = T.FusedMultiplyAdd(-c, d, cd);
        return T.FusedMultiplyAdd(a, b, -cd) + error;
    }
}
