using DeepSourceCheck.Core.Heads;

namespace DeepSourceCheck.Core.Leadfields.Spheres;

// SeriesLength.cs - how many degrees a dipole at a given depth needs.
//   A degree adds at most B_n = T_n x^(v-1) sqrt(n^2 + v^2)/r_1 to any component of the leadfield: its radial part is v P_n with |P_n| <= 1, its
//   tangential part sin P_n' with |sin P_n'| <= n (Bernstein). The series stops where the sum of all remaining B_n is below Tail of
//   the first. Beyond the last tabulated degree the sum is closed by a geometric majorant:
//     T_n <= (2n+1)/(4 pi R s_min n) 2^(layers-1) product q_j^v_j      (each layer's ratio is at most 2 q^v; the admittance at least that of s_min)
//     v_j >= m_j (n + 1/2) - 1/2, m_j = min(1, sqrt(s_t/s_r))
// Derived here; the need for a bound rather than a fixed order or the last term is common experience.

/// <summary>Degree at which the Legendre series of a layered sphere may stop, by depth.</summary>
public sealed class SeriesLength
{
    /// <summary>Largest sum of neglected terms, relative to the degree-1 term: below rounding for most heads, one part in ten of 1e-12.</summary>
    public const double Tail = 1e-13;

    /// <summary>Depths tabulated, evenly in -ln(1 - x): 2 % steps of the distance to the inner boundary.</summary>
    private const int Depths = 256;

    /// <summary>The share of <see cref="Tail"/> that the majorant may take.</summary>
    private const double MajorantShare = 0.1;

    private readonly double[] _eccentricities = new double[Depths + 1];
    private readonly int[] _degrees = new int[Depths + 1];

    /// <summary>Tabulates degrees up to <see cref="LayeredSphere.LargestEccentricity"/>.</summary>
    public SeriesLength(LayerTransfer transfer)
    {
        LargestEccentricity = LayeredSphere.LargestEccentricity * (1 + 1e-9);
        double first = transfer.Coefficient(1);
        Longest = MajorantLength(transfer, LargestEccentricity, MajorantShare * Tail * first);
        Coefficients = new double[Longest + 2];
        double[] exponents = new double[Longest + 2];
        for (int n = 1; n < Coefficients.Length; n++)
        {
            Coefficients[n] = transfer.Coefficient(n);
            exponents[n] = transfer.Exponent(0, n);
        }

        // From the shallowest depth downwards: what the next deeper one leaves out beyond the same degree shrinks at least as its first neglected power.
        double[] terms = new double[Longest + 1];
        double step = -Math.Log(1.0 - LargestEccentricity) / Depths, rest = MajorantShare * Tail;
        int degree = Longest;
        for (int k = Depths; k >= 1; k--)
        {
            double x = k == Depths ? LargestEccentricity : 1.0 - Math.Exp(-step * k);
            _eccentricities[k] = x;
            (degree, rest) = Shorten(terms, exponents, x, degree, rest, transfer.InnermostIsIsotropic);
            _degrees[k] = degree;
            rest *= Math.Pow((1.0 - Math.Exp(-step * (k - 1))) / x, exponents[degree + 1] - exponents[1]);
        }

        _degrees[0] = 1;
    }

    /// <summary>Largest admitted ratio |r0|/r_1.</summary>
    public double LargestEccentricity { get; }

    /// <summary>Largest degree that any admitted depth needs.</summary>
    public int Longest { get; }

    /// <summary>T_n [V/A] for n = 1 to <see cref="Longest"/> + 1; index 0 unused.</summary>
    public double[] Coefficients { get; }

    /// <summary>Degree for a dipole at <paramref name="eccentricity"/> = |r0|/r_1.</summary>
    /// <exception cref="ArgumentOutOfRangeException">Not between 0 and <see cref="LargestEccentricity"/>.</exception>
    public int DegreeAt(double eccentricity)
    {
        if (!(eccentricity >= 0 && eccentricity <= LargestEccentricity))
        {
            throw new ArgumentOutOfRangeException(nameof(eccentricity), eccentricity,
                $"A dipole must stand within {LayeredSphere.LargestEccentricity} of the innermost radius.");
        }

        int k = Array.BinarySearch(_eccentricities, eccentricity);
        return _degrees[k >= 0 ? k : ~k];
    }

    /// <summary>The smallest degree at depth <paramref name="x"/>, at most <paramref name="degree"/>, and what lies beyond it relative to the first term.</summary>
    private (int Degree, double LeftOut) Shorten(double[] terms, double[] exponents, double x, int degree, double rest, bool isotropic)
    {
        double logX = Math.Log(x), power = 1.0;
        for (int n = 1; n <= degree; n++)
        {
            double v = exponents[n];
            terms[n] = Coefficients[n] * Math.Sqrt(((double)n * n + v * v) / 2.0) * (isotropic ? power : Math.Exp((v - 1.0) * logX));
            power *= x;
        }

        while (degree > 1 && rest + terms[degree] / terms[1] <= Tail)
        {
            rest += terms[degree--] / terms[1];
        }

        return (degree, rest);
    }

    private static int MajorantLength(LayerTransfer transfer, double x, double allowed)
    {
        double growth = Math.Sqrt(Math.Max(1.0, transfer.Anisotropy(0))), core = Math.Min(1.0, Math.Sqrt(transfer.Anisotropy(0)));
        double logQ = core * Math.Log(x), logConstant = (0.5 * (core - 1.0) - 1.0) * Math.Log(x);
        for (int j = 1; j < transfer.Layers; j++)
        {
            double m = Math.Min(1.0, Math.Sqrt(transfer.Anisotropy(j)));
            logQ += m * transfer.LogRadiusRatio(j);
            logConstant += 0.5 * (m - 1.0) * transfer.LogRadiusRatio(j) + Math.Log(2.0);
        }

        logConstant += Math.Log(2.0 * growth / (4.0 * Math.PI * transfer.OuterRadius * transfer.SmallestConductivity) / allowed);
        double q = Math.Exp(logQ), gap = 1.0 - q;
        int degree = 1;
        while (logConstant + (degree + 1) * logQ + Math.Log((2.0 * degree + 3.0) / gap + 2.0 * q / (gap * gap)) > 0)
        {
            degree++;
        }

        return degree;
    }
}
