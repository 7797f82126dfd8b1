using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Planning;

/// <summary>The rate at which recording is shortest: trials grow as 1/A^2 and come at the rate, so that A^2 rate is largest there.</summary>
/// <remarks>
/// Between two points the amplitude A = a + b ln(rate); A^2 rate then has its only maximum where A = -2 b (derived here), else at an end. Effective numbers of trials are not in it.
/// </remarks>
public static class RateOptimum
{
    /// <summary>Amplitude at a rate of the curve, without unit.</summary>
    /// <param name="curve">At least two points, rates rising.</param>
    /// <param name="rate">Rate within the curve [1/s].</param>
    public static double Amplitude(IReadOnlyList<RatePoint> curve, double rate)
    {
        int k = 1;
        while (k < curve.Count - 1 && rate > curve[k].Rate)
        {
            k++;
        }

        (RatePoint low, RatePoint high) = (curve[k - 1], curve[k]);
        return low.Amplitude + (high.Amplitude - low.Amplitude) * Math.Log(rate / low.Rate) / Math.Log(high.Rate / low.Rate);
    }

    /// <summary>The rate of the curve with the largest A^2 rate [1/s]; the lowest of equals.</summary>
    /// <param name="curve">At least two points, rates rising.</param>
    public static double Best(IReadOnlyList<RatePoint> curve)
    {
        var candidates = new List<double> { curve[0].Rate };
        for (int k = 1; k < curve.Count; k++)
        {
            (RatePoint low, RatePoint high) = (curve[k - 1], curve[k]);
            double slope = (high.Amplitude - low.Amplitude) / Math.Log(high.Rate / low.Rate);
            double inside = low.Rate * Math.Exp(-2 - low.Amplitude / slope);
            if (slope < 0 && inside > low.Rate && inside < high.Rate)
            {
                candidates.Add(inside);
            }

            candidates.Add(high.Rate);
        }

        return candidates.MaxBy(rate => Gain(curve, rate));
    }

    /// <summary>What the stated rate costs; null without a curve, or for a rule that does not depend on the amplitude.</summary>
    /// <param name="plan">What is read.</param>
    /// <param name="rule">Rule.</param>
    /// <param name="witness">The dipole at the median.</param>
    /// <param name="stated">Minutes at the stated rate; null where out of reach.</param>
    internal static RateResult? Of(EvaluationPlan plan, ITargetRule rule, MedianWitness witness, double? stated)
    {
        IReadOnlyList<RatePoint> curve = plan.Response.RateCurve;
        if (curve.Count == 0 || plan.Protocol is not { } protocol || rule.StandsOnNoise)
        {
            return null;
        }

        double best = Best(curve), ratio = Amplitude(curve, best) / Amplitude(curve, protocol.Rate);
        double effective = rule.EffectivePower(witness.Power * ratio * ratio, witness.Artefact, witness.InverseVariance);
        long? trials = effective > 0 ? TrialCount.Ceiling(rule.Trials(effective)) : null;
        double? minutes = trials is { } n ? SessionPlan.Minutes(protocol with { Rate = best }, n) : null;
        return new(protocol.Rate, best, ratio, trials, minutes, stated - minutes, plan.Response.Window * best > 1);
    }

    private static double Gain(IReadOnlyList<RatePoint> curve, double rate)
    {
        double amplitude = Amplitude(curve, rate);
        return amplitude * amplitude * rate;
    }
}
