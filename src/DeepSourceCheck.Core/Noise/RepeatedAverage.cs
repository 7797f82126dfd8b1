namespace DeepSourceCheck.Core.Noise;

/// <summary>
/// What averaging over regularly repeated trials leaves of noise with a spectrum: trials are not independent, so that N of them count as more or fewer.
/// </summary>
/// <remarks>
/// Residual variance = integral S(f) |D_M(f)|^2 df over the band, |D_M|^2 = (sin(pi M f/r) / (M sin(pi f/r)))^2 for M stimuli at r a second: a comb on the harmonics of the rate. Where
/// trials are rejected at random, of M presented N = M (1 - q) stay, and q s^2/N adds (derived: pairs of accepted trials thin out by (1 - q)^2, single ones by 1 - q). Moving each stimulus
/// at random within a width w about its time multiplies what is above chance, |D_M|^2 - 1/M, by sinc^2(f w) (characteristic function of the uniform law). Within a period of the comb the
/// density is taken at the middle of cells that widen away from the harmonic; beyond the first 64 harmonics, where spectra hardly change within a period, the comb is its mean 1/M.
/// </remarks>
public static class RepeatedAverage
{
    private const int Harmonics = 64, LobePoints = 16, Lobes = 16;

    /// <summary>Effective over accepted trials, without unit: (s^2/N) over the residual variance of the average. 1 for white noise over many harmonics.</summary>
    /// <param name="density">One-sided power density at a frequency [Hz], of what is read.</param>
    /// <param name="low">Lower edge of the band [Hz].</param>
    /// <param name="high">Upper edge of the band [Hz].</param>
    /// <param name="breakpoints">Frequencies [Hz] at which the density has kinks.</param>
    /// <param name="rate">Stimuli per second [1/s].</param>
    /// <param name="accepted">Accepted trials N, at least 1.</param>
    /// <param name="rejected">Share q of the presented trials that is rejected at random.</param>
    /// <param name="jitter">Width w [s] over which each stimulus is moved; 0 for none.</param>
    public static double EffectiveShare(
        Func<double, double> density, double low, double high, IReadOnlyList<double> breakpoints, double rate, double accepted, double rejected, double jitter)
    {
        double presented = Math.Ceiling(accepted / (1 - rejected));
        Cell[] cells = Cells(presented);
        double variance = 0, locked = 0;                        // locked: presented times the comb's share
        double first = Math.Round(low / rate), last = Math.Round(high / rate);
        double dense = last - first <= Harmonics + 1 ? last : first + Harmonics - 1;
        Add(first, dense, low, high);
        if (dense < last)
        {
            double from = (dense + 0.5) * rate, to = (last - 0.5) * rate;
            if (to > from)
            {
                double middle = BandIntegral.Of(density, from, to, breakpoints);
                variance += middle;
                locked += middle;
            }

            Add(last, last, Math.Max(low, to), high);
        }

        double residual = (1 - rejected) * locked + rejected * variance;    // in units of 1/N: 1/M is (1 - q)/N
        return variance / residual;

        void Add(double fromHarmonic, double toHarmonic, double from, double to)
        {
            for (double k = fromHarmonic; k <= toHarmonic; k++)
            {
                foreach (Cell cell in cells)
                {
                    double f = (k + cell.Middle) * rate;
                    if (f > from && f < to)
                    {
                        double power = density(f) * rate, kept = Sinc(f * jitter);
                        kept *= kept;
                        variance += power * cell.Width;
                        locked += power * (kept * cell.Mass * presented + (1 - kept) * cell.Width);
                    }
                }
            }
        }
    }

    /// <summary>sin(pi x)/(pi x), without unit.</summary>
    internal static double Sinc(double x) => x == 0 ? 1 : Math.Sin(Math.PI * x) / (Math.PI * x);

    private static Cell[] Cells(double m)
    {
        var edges = new List<double> { 0 };
        for (double edge = 0.5 / m; edge < 0.25; edge *= 2)
        {
            edges.Add(edge);
        }

        edges.AddRange([0.35, 0.5]);
        var cells = new List<Cell>();
        for (int k = 0; k + 1 < edges.Count; k++)
        {
            double middle = 0.5 * (edges[k] + edges[k + 1]), width = edges[k + 1] - edges[k], mass = Mass(m, edges[k], edges[k + 1]);
            cells.Add(new(middle, width, mass));
            cells.Add(new(-middle, width, mass));
        }

        return [.. cells];
    }

    // Integral of (sin(pi m u) / (m sin(pi u)))^2 from a to b, 0 <= a < b <= 1/2; beyond 16 lobes with sin^2 at its mean of 1/2.
    private static double Mass(double m, double a, double b)
    {
        double near = Math.Min(b, Math.Max(a, Lobes / m)), sum = 0;
        if (near > a)
        {
            int points = Math.Max(LobePoints, (int)Math.Ceiling(LobePoints * m * (near - a)));
            double step = (near - a) / points;
            for (int k = 0; k < points; k++)
            {
                double u = a + (k + 0.5) * step, ratio = Math.Sin(Math.PI * m * u) / (m * Math.Sin(Math.PI * u));
                sum += ratio * ratio * step;
            }
        }

        return near < b ? sum + (Cot(near) - Cot(b)) / (2 * Math.PI * m * m) : sum;
    }

    private static double Cot(double u) => u >= 0.5 ? 0 : 1 / Math.Tan(Math.PI * u);

    /// <summary>A piece of a period about a harmonic: middle, width and integral of the comb, in periods.</summary>
    private readonly record struct Cell(double Middle, double Width, double Mass);
}
