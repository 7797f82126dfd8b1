namespace DeepSourceCheck.Core.Noise;

/// <summary>Integrals of power densities over a band.</summary>
/// <remarks>
/// Gauss-Legendre with 20 points in log frequency on every piece between break points, no piece longer than a factor of 4: for power laws exact to rounding.
/// </remarks>
public static class BandIntegral
{
    private static readonly (double[] Nodes, double[] Weights) Rule = Legendre(20);

    /// <summary>Integral of f over [low, high].</summary>
    /// <param name="density">Power density at a frequency [Hz].</param>
    /// <param name="low">Lower edge [Hz], positive or 0 (then the part below high/1e6 is left out).</param>
    /// <param name="high">Upper edge [Hz].</param>
    /// <param name="breakpoints">Frequencies at which the density has kinks; unordered, may lie outside.</param>
    public static double Of(Func<double, double> density, double low, double high, IEnumerable<double> breakpoints)
    {
        double sum = 0;
        foreach ((double frequency, double weight) in Nodes(low, high, breakpoints))
        {
            sum += weight * density(frequency);
        }

        return sum;
    }

    /// <summary>Quadrature nodes and weights [Hz] over a band.</summary>
    public static IEnumerable<(double Frequency, double Weight)> Nodes(double low, double high, IEnumerable<double> breakpoints)
    {
        double from = Math.Max(low, high * 1e-6);
        var edges = new List<double> { from };
        edges.AddRange(breakpoints.Where(b => b > from && b < high).Order());
        edges.Add(high);
        for (int k = 0; k + 1 < edges.Count; k++)
        {
            double a = Math.Log(edges[k]), b = Math.Log(edges[k + 1]);
            int pieces = Math.Max(1, (int)Math.Ceiling((b - a) / Math.Log(4)));
            for (int p = 0; p < pieces; p++)
            {
                double left = a + (b - a) * p / pieces, half = 0.5 * (b - a) / pieces;
                for (int i = 0; i < Rule.Nodes.Length; i++)
                {
                    double f = Math.Exp(left + half * (1 + Rule.Nodes[i]));
                    yield return (f, half * Rule.Weights[i] * f);
                }
            }
        }
    }

    private static (double[] Nodes, double[] Weights) Legendre(int order)
    {
        var rule = new MathNet.Numerics.Integration.GaussLegendreRule(-1, 1, order);
        return (rule.Abscissas, rule.Weights);
    }
}
