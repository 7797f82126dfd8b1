using System.Buffers;
using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
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

/// <summary>EEG leadfield of a layered sphere: eight dipoles per vector, four electrodes in flight.</summary>
/// <remarks>
/// Any number of layers, isotropic or radially/tangentially anisotropic. Potential with mean zero over the outer surface, V/(A m). The number of degrees follows
/// from the block's outermost dipole through <see cref="SeriesLength"/>. Electrodes are reduced to their direction from the centre.
/// </remarks>
public sealed class EegLayerSeries
{
    private const int Lanes = LeadfieldBlock.Lanes;

    /// <summary>Electrodes in flight: enough to hide the latency of the recurrence.</summary>
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

        int padded = (Rows + Flight - 1) / Flight * Flight;
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

        double[] table = ArrayPool<double>.Shared.Rent((degree + 1) * Lanes);
        if (_isotropicCore)
        {
            FillIsotropicCore(block.Eeg, lanes, degree, table);
        }
        else
        {
            FillAnisotropicCore(block.Eeg, lanes, degree, table);
        }

        ArrayPool<double>.Shared.Return(table);
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector512<double> Fma(Vector512<double> a, Vector512<double> b, Vector512<double> c) => Vector512.MultiplyAddEstimate(a, b, c);

    private void FillIsotropicCore(double[] eeg, ReadOnlySpan<double> lanes, int degree, double[] table)
    {
        Vector512<double> x = Vector512.Create(lanes), y = Vector512.Create(lanes[Lanes..]), z = Vector512.Create(lanes[(2 * Lanes)..]);
        Vector512<double> w = Fma(x, x, Fma(y, y, z * z));
        for (int n = 1; n <= degree; n++)
        {
            (w * -_beta[n]).CopyTo(table, n * Lanes);
        }

        ref double tables = ref MemoryMarshal.GetArrayDataReference(table);
        ref double alpha = ref MemoryMarshal.GetArrayDataReference(_onElectrode);
        ref double gamma = ref MemoryMarshal.GetArrayDataReference(_onPosition);
        for (int first = 0; first < _ex.Length; first += Flight)
        {
            Vector512<double> t0 = TwiceCosine(x, y, z, first), t1 = TwiceCosine(x, y, z, first + 1);
            Vector512<double> t2 = TwiceCosine(x, y, z, first + 2), t3 = TwiceCosine(x, y, z, first + 3);
            Vector512<double> g0 = Vector512<double>.One, g1 = g0, g2 = g0, g3 = g0; // G_n
            Vector512<double> p0 = Vector512<double>.Zero, p1 = p0, p2 = p0, p3 = p0; // G_(n-1)
            Vector512<double> s0 = p0, s1 = p0, s2 = p0, s3 = p0, u0 = p0, u1 = p0, u2 = p0, u3 = p0;
            int n = 1;
            for (; n + 1 < degree; n += 2)
            {
                Vector512<double> a = Vector512.Create(Unsafe.Add(ref alpha, n)), b = Vector512.Create(Unsafe.Add(ref gamma, n));
                Vector512<double> q = Vector512.LoadUnsafe(ref tables, (nuint)(n * Lanes));
                s0 = Fma(a, g0, s0);
                s1 = Fma(a, g1, s1);
                s2 = Fma(a, g2, s2);
                s3 = Fma(a, g3, s3);
                u0 = Fma(b, g0, u0);
                u1 = Fma(b, g1, u1);
                u2 = Fma(b, g2, u2);
                u3 = Fma(b, g3, u3);
                p0 = Fma(t0, g0, q * p0);
                p1 = Fma(t1, g1, q * p1);
                p2 = Fma(t2, g2, q * p2);
                p3 = Fma(t3, g3, q * p3);

                a = Vector512.Create(Unsafe.Add(ref alpha, n + 1));
                b = Vector512.Create(Unsafe.Add(ref gamma, n + 1));
                q = Vector512.LoadUnsafe(ref tables, (nuint)((n + 1) * Lanes));
                s0 = Fma(a, p0, s0);
                s1 = Fma(a, p1, s1);
                s2 = Fma(a, p2, s2);
                s3 = Fma(a, p3, s3);
                u0 = Fma(b, p0, u0);
                u1 = Fma(b, p1, u1);
                u2 = Fma(b, p2, u2);
                u3 = Fma(b, p3, u3);
                g0 = Fma(t0, p0, q * g0);
                g1 = Fma(t1, p1, q * g1);
                g2 = Fma(t2, p2, q * g2);
                g3 = Fma(t3, p3, q * g3);
            }

            if (n < degree)
            {
                Vector512<double> a = Vector512.Create(Unsafe.Add(ref alpha, n)), b = Vector512.Create(Unsafe.Add(ref gamma, n));
                Vector512<double> q = Vector512.LoadUnsafe(ref tables, (nuint)(n * Lanes));
                s0 = Fma(a, g0, s0);
                s1 = Fma(a, g1, s1);
                s2 = Fma(a, g2, s2);
                s3 = Fma(a, g3, s3);
                u0 = Fma(b, g0, u0);
                u1 = Fma(b, g1, u1);
                u2 = Fma(b, g2, u2);
                u3 = Fma(b, g3, u3);
                g0 = Fma(t0, g0, q * p0);
                g1 = Fma(t1, g1, q * p1);
                g2 = Fma(t2, g2, q * p2);
                g3 = Fma(t3, g3, q * p3);
            }

            // The last degree adds to e alone: its partner along x belongs to the next one.
            Vector512<double> last = Vector512.Create(_onElectrode[degree]);
            Store(eeg, first, x, y, z, Fma(last, g0, s0), u0);
            Store(eeg, first + 1, x, y, z, Fma(last, g1, s1), u1);
            Store(eeg, first + 2, x, y, z, Fma(last, g2, s2), u2);
            Store(eeg, first + 3, x, y, z, Fma(last, g3, s3), u3);
        }
    }

    // With the unit vector u = x/|x|, c = u.e and d_n = v/n - 1:
    //   L = (1/r_1) sum T_n |x|^(v-1) [ e P_n' - u (v/n) P_(n-1)' + u c d_n P_n' ]
    // Powers of |x| < 1 only, so that nothing overflows; one exponential a degree and lane makes this path the slower one.
    private void FillAnisotropicCore(double[] eeg, ReadOnlySpan<double> lanes, int degree, double[] table)
    {
        Vector512<double> x = Vector512.Create(lanes), y = Vector512.Create(lanes[Lanes..]), z = Vector512.Create(lanes[(2 * Lanes)..]);
        Vector512<double> norm = Vector512.Sqrt(Fma(x, x, Fma(y, y, z * z)));
        (x, y, z) = (x / norm, y / norm, z / norm);
        Vector512<double> logNorm = Vector512.Create(
            Math.Log(norm[0]), Math.Log(norm[1]), Math.Log(norm[2]), Math.Log(norm[3]), Math.Log(norm[4]), Math.Log(norm[5]), Math.Log(norm[6]), Math.Log(norm[7]));
        for (int n = 1; n <= degree; n++)
        {
            for (int lane = 0; lane < Lanes; lane++)
            {
                table[n * Lanes + lane] = Math.Exp((_exponents[n] - 1.0) * logNorm[lane]);
            }
        }

        for (int row = 0; row < Rows; row++)
        {
            Vector512<double> t = TwiceCosine(x, y, z, row);
            Vector512<double> g = Vector512<double>.One, p = Vector512<double>.Zero, s = p, u = p, v = p;
            for (int n = 1; n <= degree; n++)
            {
                Vector512<double> weight = Vector512.Create(table, n * Lanes);
                Vector512<double> weighted = weight * g;
                s = Fma(Vector512.Create(_onElectrode[n]), weighted, s);
                v = Fma(Vector512.Create(_onRadius[n]), weighted, v);
                if (n > 1)
                {
                    u = Fma(Vector512.Create(_onPosition[n - 1]), weight * p, u);
                }

                (g, p) = (Fma(t, g, p * -_beta[n]), g);
            }

            Store(eeg, row, x, y, z, s, Fma(t * -0.5, v, u));
        }
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private Vector512<double> TwiceCosine(Vector512<double> x, Vector512<double> y, Vector512<double> z, int row) =>
        2.0 * Fma(x, Vector512.Create(_ex[row]), Fma(y, Vector512.Create(_ey[row]), z * _ez[row]));

    /// <summary>L = s e - u x; rows beyond the last electrode are padding.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private void Store(
        double[] eeg, int row, Vector512<double> x, Vector512<double> y, Vector512<double> z, Vector512<double> s, Vector512<double> u)
    {
        if (row >= Rows)
        {
            return;
        }

        int at = LeadfieldBlock.At(row, 0);
        (s * _ex[row] - u * x).CopyTo(eeg, at);
        (s * _ey[row] - u * y).CopyTo(eeg, at + Lanes);
        (s * _ez[row] - u * z).CopyTo(eeg, at + 2 * Lanes);
    }
}
