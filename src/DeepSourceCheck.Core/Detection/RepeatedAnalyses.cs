using DeepSourceCheck.Core.Numerics;
using DeepSourceCheck.Core.Studies;

using MathNet.Numerics.Distributions;
using MathNet.Numerics.Integration;

namespace DeepSourceCheck.Core.Detection;

/// <summary>One-sided analyses of a growing average with known noise, at equal steps of trials: bounds, chances to stop, and the drift that reaches a power.</summary>
/// <remarks>
/// S_k is the sum of k independent steps of variance 1 and mean shift; analysis k stops where S_k / sqrt(k) passes bound k. The density of S_k among those that went on follows from that of
/// S_(k-1) by one integral: Armitage, McPherson and Rowe 1969, J R Stat Soc A 132:235 (from memory). Gauss-Legendre on panels of one standard deviation of a step: some 1e-12.
/// </remarks>
public sealed class RepeatedAnalyses
{
    private const int PointsOfPanel = 12;

    /// <summary>Standard deviations beyond which a density holds less than 1e-18.</summary>
    private const double Reach = 9;

    /// <summary>A bound is sought below this; a rate that needs a higher one, under 1e-300, is not spent.</summary>
    private const double HighestBound = 37;

    private readonly double[] _bounds;

    /// <summary>Bounds that spend a false-alarm rate as a function says.</summary>
    /// <param name="alpha">False-alarm rate of all analyses together, 0 to 1/2.</param>
    /// <param name="choice">Number of analyses and spending function.</param>
    public RepeatedAnalyses(double alpha, StoppingChoice choice)
    {
        int count = choice.Analyses;
        _bounds = new double[count];
        double spent = 0;
        Stage? stage = null;
        for (int k = 1; k <= count; k++)
        {
            double until = AlphaSpending.Spent(choice.Spending, alpha, (double)k / count), here = until - spent;
            double Excess(double z) => Passing(stage, z * Math.Sqrt(k), 0) - here;
            _bounds[k - 1] = Excess(HighestBound) >= 0 ? HighestBound : RootSearch.Between(Excess, -Reach, HighestBound);
            spent = until;
            stage = Next(stage, k, _bounds[k - 1], 0);
        }
    }

    /// <summary>Stated bounds.</summary>
    /// <param name="bounds">Bound of each analysis in standard deviations of its average, without unit.</param>
    public RepeatedAnalyses(IReadOnlyList<double> bounds) => _bounds = [.. bounds];

    /// <summary>Bound of each analysis in standard deviations of its average, without unit.</summary>
    public IReadOnlyList<double> Bounds => _bounds;

    /// <summary>Probability of stopping at each analysis for the first time.</summary>
    /// <param name="drift">Mean of the last analysis in standard deviations of its average, without unit: 0 without a response.</param>
    public double[] Stops(double drift)
    {
        double shift = drift / Math.Sqrt(_bounds.Length);
        var stops = new double[_bounds.Length];
        Stage? stage = null;
        for (int k = 1; k <= stops.Length; k++)
        {
            stops[k - 1] = Passing(stage, _bounds[k - 1] * Math.Sqrt(k), shift);
            stage = k < stops.Length ? Next(stage, k, _bounds[k - 1], shift) : stage;
        }

        return stops;
    }

    /// <summary>Mean of the last analysis, in standard deviations of its average, without unit, at which all analyses together pass with a probability.</summary>
    /// <param name="power">Probability, above the false-alarm rate and below 1.</param>
    public double Drift(double power) => RootSearch.Increasing(drift => Stops(drift).Sum() - power, _bounds[^1] + 1, 1e-13);

    /// <summary>The sum among those that went on: nodes, and the probability that each node stands for.</summary>
    private sealed record Stage(double[] Places, double[] Weights);

    private static double Above(double x) => Normal.CDF(0, 1, -x);

    private static double Passing(Stage? before, double bound, double shift)
    {
        if (before is null)
        {
            return Above(bound - shift);
        }

        double sum = 0;
        for (int j = 0; j < before.Places.Length; j++)
        {
            sum += before.Weights[j] * Above(bound - before.Places[j] - shift);
        }

        return sum;
    }

    private static Stage Next(Stage? before, int k, double bound, double shift)
    {
        double root = Math.Sqrt(k), low = k * shift - Reach * root, high = Math.Min(bound * root, k * shift + Reach * root);
        if (high <= low)
        {
            return new([], []);
        }

        int panels = (int)Math.Ceiling(high - low);
        double[] places = new double[panels * PointsOfPanel], weights = new double[places.Length];
        for (int p = 0; p < panels; p++)
        {
            var rule = new GaussLegendreRule(low + (high - low) * p / panels, low + (high - low) * (p + 1) / panels, PointsOfPanel);
            for (int i = 0; i < PointsOfPanel; i++)
            {
                double place = rule.GetAbscissa(i);
                places[p * PointsOfPanel + i] = place;
                weights[p * PointsOfPanel + i] = rule.GetWeight(i) * Density(before, place - shift);
            }
        }

        return new(places, weights);
    }

    private static double Density(Stage? before, double x)
    {
        double scale = 1 / Math.Sqrt(2 * Math.PI);
        if (before is null)
        {
            return scale * Math.Exp(-x * x / 2);
        }

        double sum = 0;
        for (int j = 0; j < before.Places.Length; j++)
        {
            double step = x - before.Places[j];
            sum += before.Weights[j] * Math.Exp(-step * step / 2);
        }

        return scale * sum;
    }
}
