using System.Buffers;
using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Numerics;
using DeepSourceCheck.Core.Sensors;

namespace DeepSourceCheck.Core.Leadfields.Spheres;

// EegLayerSeries.cs - electric potential of a current dipole in concentric layers, on the outer surface.
//   x = (r0 - centre)/r_1, e = unit vector of the electrode, n = degree, T_n from LayerTransfer:
//     L = grad Phi = (1/r_1) [ e sum T_n D_n - x sum T_n D_(n-1) ],  D_n = |x|^(n-1) P_n'(cos)
//   No division by a sine or by |x|: exact at the centre and for aligned electrodes.
//   D_n = c_n G_n with c_(n+1) = c_n (2n+1)/(2n) leaves four instructions a degree:
//     G_(n+1) = 2 (x.e) G_n - beta_n |x|^2 G_(n-1),  beta_n = 4 (n^2 - 1)/(4 n^2 - 1)
//   c_n and 1/r_1 are absorbed in the coefficients a_n (of e) and b_n (of -x).
// Where the innermost layer is anisotropic, |x|^(n-1) becomes |x|^(v-1) and the radial derivative v in place of n (see FillAnisotropicCore).
// Sources: [de Munck & Peters 1993], [Zhang 1995], [Mosher, Leahy & Lewis 1999]; derivative form derived here.

/// <summary>EEG leadfield of a layered sphere: eight dipoles per vector where registers are wide enough, four electrodes in flight where there are enough of them.</summary>
/// <remarks>
/// Any number of layers, isotropic or radially/tangentially anisotropic. Potential with mean zero over the outer surface, V/(A m). The number of degrees follows
/// from the block's outermost dipole through <see cref="SeriesLength"/>. Electrodes are reduced to their direction from the centre.
/// </remarks>
public sealed class EegLayerSeries
{
    private const int Lanes = LeadfieldBlock.Lanes;

    /// <summary>Most electrodes in flight: enough to hide the latency of the recurrence.</summary>
    private const int Flight = 4;

    private readonly Vec3 _centre;
    private readonly double _innerRadius;
    private readonly bool _isotropicCore;
    private readonly SeriesLength _length;
    private readonly double[] _onElectrode, _onPosition, _beta;
    private readonly double[] _exponents = [], _onRadius = [];
    private readonly double[] _ex, _ey, _ez;

    /// <summary>Prepares the degree table for <paramref name="head"/> and the directions of <paramref name="electrodes"/>.</summary>
    /// <exception cref="ArgumentException">A layer is impossible, or an electrode has no direction from the centre.</exception>
    public EegLayerSeries(LayeredSphere head, IReadOnlyList<Electrode> electrodes)
    {
        LayerTransfer transfer = new(head);
        _centre = head.Centre;
        _innerRadius = transfer.InnerRadius;
        _isotropicCore = transfer.InnermostIsIsotropic;
        _length = new SeriesLength(transfer);
        Rows = electrodes.Count;

        int padded = Rows == 0 ? 0 : Rows + Flight - 1;       // the last ones in flight may be repeated
        _ex = new double[padded];
        _ey = new double[padded];
        _ez = new double[padded];
        for (int row = 0; row < padded; row++)
        {
            Electrode electrode = electrodes[Math.Min(row, Rows - 1)];
            Vec3 offset = electrode.Position - _centre;
            if (!offset.IsFinite || !(offset.Norm > 0))
            {
                throw new ArgumentException($"Electrode {electrode.Name} has no direction from the sphere's centre.", nameof(electrodes));
            }

            (_ex[row], _ey[row], _ez[row]) = offset.Unit();
        }

        int top = _length.Longest + 1;
        _onElectrode = new double[top];
        _onPosition = new double[top];
        _beta = new double[top];
        double c = 1.0;
        for (int n = 1; n < top; n++)
        {
            _onElectrode[n] = _length.Coefficients[n] * c / _innerRadius;
            _onPosition[n] = _length.Coefficients[n + 1] * c / _innerRadius;
            _beta[n] = 4.0 * ((double)n * n - 1.0) / (4.0 * n * n - 1.0);
            c *= (2.0 * n + 1.0) / (2.0 * n);
        }

        if (!_isotropicCore)
        {
            _exponents = new double[top + 1];
            _onRadius = new double[top];
            for (int n = 1; n <= top; n++)
            {
                _exponents[n] = transfer.Exponent(0, n);
            }

            for (int n = 1; n < top; n++)
            {
                _onRadius[n] = _onElectrode[n] * (_exponents[n] / n - 1.0);
                _onPosition[n] *= _exponents[n + 1] / (n + 1.0);
            }
        }
    }

    /// <summary>Number of electrodes.</summary>
    public int Rows { get; }

    /// <summary>Degrees that a dipole at <paramref name="position"/> [m] takes.</summary>
    public int DegreeAt(Vec3 position) => _length.DegreeAt((position - _centre).Norm / _innerRadius);

    /// <summary>Overwrites the block's EEG values [V/(A m)].</summary>
    /// <exception cref="ArgumentOutOfRangeException">A dipole lies beyond 0.995 of the innermost radius, is not finite, or stands at the centre of an anisotropic innermost layer, where no potential is defined.</exception>
    public void Fill(LeadfieldBlock block)
    {
        Span<double> lanes = stackalloc double[3 * Lanes];
        double outermost = 0, innermost = double.PositiveInfinity;
        for (int lane = 0; lane < Lanes; lane++)
        {
            Vec3 x = (block.Positions[lane] - _centre) / _innerRadius;
            double eccentricity = x.Norm;
            (lanes[lane], lanes[Lanes + lane], lanes[2 * Lanes + lane]) = (x.X, x.Y, x.Z);
            outermost = eccentricity > outermost || double.IsNaN(eccentricity) ? eccentricity : outermost;
            innermost = Math.Min(innermost, eccentricity);
        }

        int degree = _length.DegreeAt(outermost);
        if (!_isotropicCore && !(innermost > 0))
        {
            throw new ArgumentOutOfRangeException(nameof(block), "At the centre of an anisotropic innermost layer no potential is defined.");
        }

        switch (LaneWidth.Lanes)
        {
            case 8:
                Fill<EightLanes>(block.Eeg, lanes, degree);
                break;
            case 4:
                Fill<FourLanes>(block.Eeg, lanes, degree);
                break;
            default:
                Fill<TwoLanes>(block.Eeg, lanes, degree);
                break;
        }
    }

    /// <summary>Fills all eight lanes, as many at a time as a register holds.</summary>
    /// <param name="eeg">[row][axis][lane], overwritten [V/(A m)].</param>
    /// <param name="positions">x of the formulas, [axis][lane], without unit.</param>
    /// <param name="degree">Number of degrees.</param>
    internal void Fill<T>(double[] eeg, ReadOnlySpan<double> positions, int degree)
        where T : struct, ILaneVector<T>
    {
        double[] table = ArrayPool<double>.Shared.Rent((degree + 1) * T.Count);
        ref double position = ref MemoryMarshal.GetReference(positions);
        for (int lane = 0; lane < Lanes; lane += T.Count)
        {
            nuint at = (nuint)lane;
            T x = T.Load(ref position, at), y = T.Load(ref position, at + Lanes), z = T.Load(ref position, at + 2 * Lanes);
            if (_isotropicCore)
            {
                FillIsotropicCore(eeg, lane, x, y, z, degree, table);
            }
            else
            {
                FillAnisotropicCore(eeg, lane, x, y, z, degree, table);
            }
        }

        ArrayPool<double>.Shared.Return(table);
    }

    private void FillIsotropicCore<T>(double[] eeg, int lane, T x, T y, T z, int degree, double[] table)
        where T : struct, ILaneVector<T>
    {
        ref double weights = ref MemoryMarshal.GetArrayDataReference(table);
        T w = T.MultiplyAdd(x, x, T.MultiplyAdd(y, y, z * z));
        for (int n = 1; n <= degree; n++)
        {
            (w * T.All(-_beta[n])).Store(ref weights, (nuint)(n * T.Count));
        }

        if (T.ManyRegisters)
        {
            FourInFlight(eeg, lane, x, y, z, degree, ref weights);
        }
        else
        {
            ThreeInFlight(eeg, lane, x, y, z, degree, ref weights);
        }
    }

    /// <summary>The series of four electrodes at a time: twenty sums and terms in registers.</summary>
    private void FourInFlight<T>(double[] eeg, int lane, T x, T y, T z, int degree, ref double weights)
        where T : struct, ILaneVector<T>
    {
        ref double alpha = ref MemoryMarshal.GetArrayDataReference(_onElectrode);
        ref double gamma = ref MemoryMarshal.GetArrayDataReference(_onPosition);
        for (int row = 0; row < Rows; row += Flight)
        {
            T t0 = TwiceCosine(x, y, z, row), t1 = TwiceCosine(x, y, z, row + 1), t2 = TwiceCosine(x, y, z, row + 2), t3 = TwiceCosine(x, y, z, row + 3);
            T g0 = T.All(1), g1 = g0, g2 = g0, g3 = g0;         // G_n
            T p0 = default, p1 = default, p2 = default, p3 = default; // G_(n-1)
            T s0 = default, s1 = default, s2 = default, s3 = default, u0 = default, u1 = default, u2 = default, u3 = default;
            int n = 1;
            for (; n + 1 < degree; n += 2)
            {
                T a = T.All(Unsafe.Add(ref alpha, n)), b = T.All(Unsafe.Add(ref gamma, n)), q = T.Load(ref weights, (nuint)(n * T.Count));
                s0 = T.MultiplyAdd(a, g0, s0);
                s1 = T.MultiplyAdd(a, g1, s1);
                s2 = T.MultiplyAdd(a, g2, s2);
                s3 = T.MultiplyAdd(a, g3, s3);
                u0 = T.MultiplyAdd(b, g0, u0);
                u1 = T.MultiplyAdd(b, g1, u1);
                u2 = T.MultiplyAdd(b, g2, u2);
                u3 = T.MultiplyAdd(b, g3, u3);
                p0 = T.MultiplyAdd(t0, g0, q * p0);
                p1 = T.MultiplyAdd(t1, g1, q * p1);
                p2 = T.MultiplyAdd(t2, g2, q * p2);
                p3 = T.MultiplyAdd(t3, g3, q * p3);

                a = T.All(Unsafe.Add(ref alpha, n + 1));
                b = T.All(Unsafe.Add(ref gamma, n + 1));
                q = T.Load(ref weights, (nuint)((n + 1) * T.Count));
                s0 = T.MultiplyAdd(a, p0, s0);
                s1 = T.MultiplyAdd(a, p1, s1);
                s2 = T.MultiplyAdd(a, p2, s2);
                s3 = T.MultiplyAdd(a, p3, s3);
                u0 = T.MultiplyAdd(b, p0, u0);
                u1 = T.MultiplyAdd(b, p1, u1);
                u2 = T.MultiplyAdd(b, p2, u2);
                u3 = T.MultiplyAdd(b, p3, u3);
                g0 = T.MultiplyAdd(t0, p0, q * g0);
                g1 = T.MultiplyAdd(t1, p1, q * g1);
                g2 = T.MultiplyAdd(t2, p2, q * g2);
                g3 = T.MultiplyAdd(t3, p3, q * g3);
            }

            if (n < degree)
            {
                T a = T.All(Unsafe.Add(ref alpha, n)), b = T.All(Unsafe.Add(ref gamma, n)), q = T.Load(ref weights, (nuint)(n * T.Count));
                s0 = T.MultiplyAdd(a, g0, s0);
                s1 = T.MultiplyAdd(a, g1, s1);
                s2 = T.MultiplyAdd(a, g2, s2);
                s3 = T.MultiplyAdd(a, g3, s3);
                u0 = T.MultiplyAdd(b, g0, u0);
                u1 = T.MultiplyAdd(b, g1, u1);
                u2 = T.MultiplyAdd(b, g2, u2);
                u3 = T.MultiplyAdd(b, g3, u3);
                g0 = T.MultiplyAdd(t0, g0, q * p0);
                g1 = T.MultiplyAdd(t1, g1, q * p1);
                g2 = T.MultiplyAdd(t2, g2, q * p2);
                g3 = T.MultiplyAdd(t3, g3, q * p3);
            }

            // The last degree adds to e alone: its partner along x belongs to the next one.
            T last = T.All(Unsafe.Add(ref alpha, degree));
            Store(eeg, row, lane, x, y, z, T.MultiplyAdd(last, g0, s0), u0);
            Store(eeg, row + 1, lane, x, y, z, T.MultiplyAdd(last, g1, s1), u1);
            Store(eeg, row + 2, lane, x, y, z, T.MultiplyAdd(last, g2, s2), u2);
            Store(eeg, row + 3, lane, x, y, z, T.MultiplyAdd(last, g3, s3), u3);
        }
    }

    /// <summary>The same, three electrodes at a time, for sixteen registers.</summary>
    private void ThreeInFlight<T>(double[] eeg, int lane, T x, T y, T z, int degree, ref double weights)
        where T : struct, ILaneVector<T>
    {
        ref double alpha = ref MemoryMarshal.GetArrayDataReference(_onElectrode);
        ref double gamma = ref MemoryMarshal.GetArrayDataReference(_onPosition);
        for (int row = 0; row < Rows; row += 3)
        {
            T t0 = TwiceCosine(x, y, z, row), t1 = TwiceCosine(x, y, z, row + 1), t2 = TwiceCosine(x, y, z, row + 2), g0 = T.All(1), g1 = g0, g2 = g0;
            T p0 = default, p1 = default, p2 = default, s0 = default, s1 = default, s2 = default, u0 = default, u1 = default, u2 = default;
            int n = 1;
            for (; n + 1 < degree; n += 2)
            {
                T c = T.All(Unsafe.Add(ref alpha, n));
                s0 = T.MultiplyAdd(c, g0, s0);
                s1 = T.MultiplyAdd(c, g1, s1);
                s2 = T.MultiplyAdd(c, g2, s2);
                c = T.All(Unsafe.Add(ref gamma, n));
                u0 = T.MultiplyAdd(c, g0, u0);
                u1 = T.MultiplyAdd(c, g1, u1);
                u2 = T.MultiplyAdd(c, g2, u2);
                c = T.Load(ref weights, (nuint)(n * T.Count));
                p0 = T.MultiplyAdd(t0, g0, c * p0);
                p1 = T.MultiplyAdd(t1, g1, c * p1);
                p2 = T.MultiplyAdd(t2, g2, c * p2);

                c = T.All(Unsafe.Add(ref alpha, n + 1));
                s0 = T.MultiplyAdd(c, p0, s0);
                s1 = T.MultiplyAdd(c, p1, s1);
                s2 = T.MultiplyAdd(c, p2, s2);
                c = T.All(Unsafe.Add(ref gamma, n + 1));
                u0 = T.MultiplyAdd(c, p0, u0);
                u1 = T.MultiplyAdd(c, p1, u1);
                u2 = T.MultiplyAdd(c, p2, u2);
                c = T.Load(ref weights, (nuint)((n + 1) * T.Count));
                g0 = T.MultiplyAdd(t0, p0, c * g0);
                g1 = T.MultiplyAdd(t1, p1, c * g1);
                g2 = T.MultiplyAdd(t2, p2, c * g2);
            }

            if (n < degree)
            {
                T c = T.All(Unsafe.Add(ref alpha, n));
                s0 = T.MultiplyAdd(c, g0, s0);
                s1 = T.MultiplyAdd(c, g1, s1);
                s2 = T.MultiplyAdd(c, g2, s2);
                c = T.All(Unsafe.Add(ref gamma, n));
                u0 = T.MultiplyAdd(c, g0, u0);
                u1 = T.MultiplyAdd(c, g1, u1);
                u2 = T.MultiplyAdd(c, g2, u2);
                c = T.Load(ref weights, (nuint)(n * T.Count));
                g0 = T.MultiplyAdd(t0, g0, c * p0);
                g1 = T.MultiplyAdd(t1, g1, c * p1);
                g2 = T.MultiplyAdd(t2, g2, c * p2);
            }

            T last = T.All(Unsafe.Add(ref alpha, degree));
            Store(eeg, row, lane, x, y, z, T.MultiplyAdd(last, g0, s0), u0);
            Store(eeg, row + 1, lane, x, y, z, T.MultiplyAdd(last, g1, s1), u1);
            Store(eeg, row + 2, lane, x, y, z, T.MultiplyAdd(last, g2, s2), u2);
        }
    }

    // With the unit vector u = x/|x|, c = u.e and d_n = v/n - 1:
    //   L = (1/r_1) sum T_n |x|^(v-1) [ e P_n' - u (v/n) P_(n-1)' + u c d_n P_n' ]
    // Powers of |x| < 1 only, so that nothing overflows; one exponential a degree and lane makes this path the slower one.
    private void FillAnisotropicCore<T>(double[] eeg, int lane, T x, T y, T z, int degree, double[] table)
        where T : struct, ILaneVector<T>
    {
        ref double weights = ref MemoryMarshal.GetArrayDataReference(table);
        T norm = T.Sqrt(T.MultiplyAdd(x, x, T.MultiplyAdd(y, y, z * z)));
        (x, y, z) = (x / norm, y / norm, z / norm);
        Span<double> logNorm = stackalloc double[Lanes];
        norm.Store(ref MemoryMarshal.GetReference(logNorm), 0);
        for (int k = 0; k < T.Count; k++)
        {
            logNorm[k] = Math.Log(logNorm[k]);
        }

        for (int n = 1; n <= degree; n++)
        {
            for (int k = 0; k < T.Count; k++)
            {
                table[n * T.Count + k] = Math.Exp((_exponents[n] - 1.0) * logNorm[k]);
            }
        }

        for (int row = 0; row < Rows; row++)
        {
            T t = TwiceCosine(x, y, z, row), g = T.All(1), p = default, s = default, u = default, v = default;
            for (int n = 1; n <= degree; n++)
            {
                T weight = T.Load(ref weights, (nuint)(n * T.Count)), weighted = weight * g;
                s = T.MultiplyAdd(T.All(_onElectrode[n]), weighted, s);
                v = T.MultiplyAdd(T.All(_onRadius[n]), weighted, v);
                if (n > 1)
                {
                    u = T.MultiplyAdd(T.All(_onPosition[n - 1]), weight * p, u);
                }

                (g, p) = (T.MultiplyAdd(t, g, p * T.All(-_beta[n])), g);
            }

            Store(eeg, row, lane, x, y, z, s, T.MultiplyAdd(t * T.All(-0.5), v, u));
        }
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private T TwiceCosine<T>(T x, T y, T z, int row)
        where T : struct, ILaneVector<T> =>
        T.All(2) * T.MultiplyAdd(x, T.All(_ex[row]), T.MultiplyAdd(y, T.All(_ey[row]), z * T.All(_ez[row])));

    /// <summary>L = s e - u x; rows beyond the last electrode are padding.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private void Store<T>(double[] eeg, int row, int lane, T x, T y, T z, T s, T u)
        where T : struct, ILaneVector<T>
    {
        if (row >= Rows)
        {
            return;
        }

        ref double to = ref eeg[LeadfieldBlock.At(row, 0) + lane];
        (s * T.All(_ex[row]) - u * x).Store(ref to, 0);
        (s * T.All(_ey[row]) - u * y).Store(ref to, Lanes);
        (s * T.All(_ez[row]) - u * z).Store(ref to, 2 * Lanes);
    }
}
