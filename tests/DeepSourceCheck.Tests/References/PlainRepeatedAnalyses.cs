using MathNet.Numerics.Distributions;

namespace DeepSourceCheck.Tests.References;

/// <summary>Repeated analyses of a growing average from their definition: the density of the running sum on an even grid, Simpson's rule; one-sided, or on both sides for published tables.</summary>
internal static class PlainRepeatedAnalyses
{
    private const int Intervals = 1200;

    /// <summary>Probability of passing a bound, above or (where two-sided) below, for the first time at each analysis.</summary>
    public static double[] Stops(IReadOnlyList<double> bounds, double drift, bool twoSided)
    {
        int count = bounds.Count;
        double shift = drift / Math.Sqrt(count);
        double[] stops = new double[count], places = [0], weights = [1];
        for (int k = 1; k <= count; k++)
        {
            double root = Math.Sqrt(k), high = Math.Min(bounds[k - 1] * root, k * shift + 10 * root), low = twoSided ? -high : k * shift - 10 * root;
            double[] next = new double[Intervals + 1], nextWeights = new double[Intervals + 1];
            double width = (high - low) / Intervals;
            for (int j = 0; j < places.Length; j++)
            {
                stops[k - 1] += weights[j] * (Normal.CDF(0, 1, places[j] + shift - bounds[k - 1] * root) + (twoSided ? Normal.CDF(0, 1, low - places[j] - shift) : 0));
            }

            for (int i = 0; i <= Intervals; i++)
            {
                next[i] = low + i * width;
                double density = 0;
                for (int j = 0; j < places.Length; j++)
                {
                    density += weights[j] * Normal.PDF(places[j] + shift, 1, next[i]);
                }

                nextWeights[i] = density * width / 3 * (i is 0 or Intervals ? 1 : i % 2 == 1 ? 4 : 2);
            }

            (places, weights) = (next, nextWeights);
        }

        return stops;
    }
}
