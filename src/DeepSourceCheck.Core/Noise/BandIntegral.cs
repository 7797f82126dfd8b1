namespace DeepSourceCheck.Core.Noise;

/// <summary>Integrals of power densities over a band.</summary>
/// <remarks>
/// Gauss-Legendre with 20 points in log frequency on every piece between break points, no piece longer than a factor of 4: for power laws exact to rounding.
/// </remarks>
public static class BandIntegral
{
    /// <summary>Of a band from 0 Hz what lies below this share of its upper edge is left out.</summary>
    public const double LowestShare = 1e-6;

    // Positive abscissas and their weights of the rule of 20 points on [-1, 1], falling; a test holds them against a numerical library.
    private static readonly double[] Abscissas =
    [
        0.9931285991850949, 0.9639719272779138, 0.912234428251326, 0.8391169718222188, 0.7463319064601508,
        0.636053680726515, 0.5108670019508271, 0.37370608871541955, 0.22778585114164507, 0.07652652113349734,
    ];

    private static readonly double[] Weights =
    [
        0.017614007139152118, 0.04060142980038694, 0.06267204833410907, 0.08327674157670475, 0.10193011981724044,
        0.11819453196151841, 0.13168863844917664, 0.14209610931838204, 0.14917298647260374, 0.15275338713072584,
    ];

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
    /// <param name="low">As for <see cref="Of"/>.</param>
    /// <param name="high">As for <see cref="Of"/>.</param>
    /// <param name="breakpoints">As for <see cref="Of"/>.</param>
    public static IReadOnlyList<BandNode> Nodes(double low, double high, IEnumerable<double> breakpoints)
    {
        double[] edges = Edges(Math.Max(low, high * LowestShare), high, breakpoints);
        var nodes = new BandNode[Count(edges)];
        int at = 0;
        for (int k = 0; k + 1 < edges.Length; k++)
        {
            double a = Math.Log(edges[k]), b = Math.Log(edges[k + 1]);
            int pieces = Pieces(a, b);
            for (int p = 0; p < pieces; p++)
            {
                double left = a + (b - a) * p / pieces, half = 0.5 * (b - a) / pieces;
                for (int i = 0; i < 2 * Abscissas.Length; i++)
                {
                    bool lower = i < Abscissas.Length;
                    int pair = lower ? i : 2 * Abscissas.Length - 1 - i;
                    double f = Math.Exp(left + half * (1 + (lower ? -Abscissas[pair] : Abscissas[pair])));
                    nodes[at++] = new(f, half * Weights[pair] * f);
                }
            }
        }

        return nodes;
    }

    // The band's edges and the break points within, ascending.
    private static double[] Edges(double from, double to, IEnumerable<double> breakpoints)
    {
        double[] edges = [from, to];
        foreach (double breakpoint in breakpoints)
        {
            if (breakpoint > from && breakpoint < to)
            {
                Array.Resize(ref edges, edges.Length + 1);
                int at = edges.Length - 1;
                for (; edges[at - 1] > breakpoint; at--)
                {
                    edges[at] = edges[at - 1];
                }

                edges[at] = breakpoint;
            }
        }

        return edges;
    }

    private static int Pieces(double logLow, double logHigh) => Math.Max(1, (int)Math.Ceiling((logHigh - logLow) / Math.Log(4)));

    private static int Count(double[] edges)
    {
        int pieces = 0;
        for (int k = 0; k + 1 < edges.Length; k++)
        {
            pieces += Pieces(Math.Log(edges[k]), Math.Log(edges[k + 1]));
        }

        return pieces * 2 * Abscissas.Length;
    }
}

/// <summary>A node of a quadrature over a band.</summary>
/// <param name="Frequency">Frequency [Hz].</param>
/// <param name="Weight">Weight [Hz].</param>
public readonly record struct BandNode(double Frequency, double Weight);
