namespace DeepSourceCheck.Core.Noise;

/// <summary>
/// What averaging over regularly repeated trials leaves of noise with a spectrum: trials are not independent, so that N of them count as more or fewer.
/// </summary>
/// <remarks>
/// Residual variance = integral S(f) |D_M(f)|^2 df over the band, |D_M|^2 = (sin(pi M f/r) / (M sin(pi f/r)))^2 for M stimuli at r a second: a comb on the harmonics of the rate. Where
/// trials are rejected at random, of M presented N = M (1 - q) stay, and q s^2/N adds (derived: pairs of accepted trials thin out by (1 - q)^2, single ones by 1 - q). Moving each stimulus
/// at random within a width w about its time multiplies what is above chance, |D_M|^2 - 1/M, by sinc^2(f w) (characteristic function of the uniform law). Within a period of the comb the
/// density is taken at the centroid of cells that widen away from the harmonic, good to 1e-3 for densities that are smooth on the scale of a 64th of the rate; for many trials
/// variance/residual tends to integral S df / (r sum over k of S(k r)), a harmonic on an edge of the band counting half. Beyond the first 64 harmonics, where spectra hardly change within a period, the comb is its mean 1/M.
/// </remarks>
public static class RepeatedAverage
{
    private const int Harmonics = 64, CellPoints = 16, Lobes = 16;
    private const double WidestCell = 1.0 / 64, Rounding = 1e-6;

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
        low = Math.Max(low, BandIntegral.LowestShare * high);
        Cell[] cells = Cells(presented);
        double locked = 0;                                                  // presented times the comb's share
        double first = Math.Round(low / rate), last = Math.Round(high / rate);
        double dense = last - first <= Harmonics + 1 ? last : first + Harmonics - 1;
        // Halves of a period as pieces of their own resolve what the comb resolves.
        IEnumerable<double> halves = Enumerable.Range(0, (int)(2 * (dense - first)) + 3).Select(k => (first - 0.5 + 0.5 * k) * rate);
        double variance = BandIntegral.Of(density, low, high, [.. breakpoints, .. halves]);
        Add(first, dense, low, high);
        if (dense < last)
        {
            double from = (dense + 0.5) * rate, to = (last - 0.5) * rate;
            locked += to > from ? BandIntegral.Of(density, from, to, breakpoints) : 0;
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
                    double start = (k + cell.From) * rate, end = (k + cell.To) * rate, inside = (Math.Min(end, to) - Math.Max(start, from)) / (end - start);
                    if (inside > 0)
                    {
                        double f = inside < 1 ? 0.5 * (Math.Min(end, to) + Math.Max(start, from)) : (k + cell.Centroid) * rate;
                        double power = density(f) * rate * Math.Min(1, inside), kept = Sinc(f * jitter);
                        kept *= kept;
                        locked += power * (kept * cell.Mass * presented + (1 - kept) * (cell.To - cell.From));
                    }
                }
            }
        }
    }

    /// <summary>sin(pi x)/(pi x), without unit.</summary>
    internal static double Sinc(double x) => x == 0 ? 1 : Math.Sin(Math.PI * x) / (Math.PI * x);

    // Eight cells in the first lobe, four in each of the next three, one in each up to the last; beyond, cells widen by a quarter. None is wider than a set share of the period.
    private static Cell[] Cells(double m)
    {
        var edges = new List<double> { 0 };
        while (edges[^1] < 0.5)
        {
            double at = edges[^1], lobe = at * m;
            double width = lobe < 1 - Rounding ? 0.125 / m : lobe < 4 - Rounding ? 0.25 / m : lobe < Lobes - Rounding ? 1 / m : 0.25 * at;
            double next = at + Math.Min(width, WidestCell);
            edges.Add(next > 0.5 - Rounding / m ? 0.5 : next);
        }

        var cells = new List<Cell>();
        for (int k = 0; k + 1 < edges.Count; k++)
        {
            (double mass, double centroid) = Mass(m, edges[k], edges[k + 1]);
            cells.Add(new(edges[k], edges[k + 1], centroid, mass));
            cells.Add(new(-edges[k + 1], -edges[k], -centroid, mass));
        }

        return [.. cells];
    }

    // Integral and centroid of (sin(pi m u) / (m sin(pi u)))^2 from a to b, 0 <= a < b <= 1/2; beyond 16 lobes with sin^2 at its mean of 1/2.
    private static (double Mass, double Centroid) Mass(double m, double a, double b)
    {
        bool far = a >= (Lobes - Rounding) / m;
        double step = (b - a) / CellPoints, sum = 0, moment = 0;
        for (int k = 0; k < CellPoints; k++)
        {
            double u = a + (k + 0.5) * step, below = m * Math.Sin(Math.PI * u), above = Math.Sin(Math.PI * m * u);
            double comb = (far ? 0.5 : above * above) / (below * below);
            sum += comb * step;
            moment += comb * step * u;
        }

        double centroid = sum > 0 ? moment / sum : 0.5 * (a + b);
        return (far ? (Cot(a) - Cot(b)) / (2 * Math.PI * m * m) : sum, centroid);
    }

    private static double Cot(double u) => u >= 0.5 ? 0 : 1 / Math.Tan(Math.PI * u);

    /// <summary>A piece of a period about a harmonic: edges, centroid and integral of the comb, in periods.</summary>
    private readonly record struct Cell(double From, double To, double Centroid, double Mass);
}
