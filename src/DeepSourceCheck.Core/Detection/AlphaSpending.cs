using DeepSourceCheck.Core.Studies;

using MathNet.Numerics.Distributions;

namespace DeepSourceCheck.Core.Detection;

/// <summary>How much of a one-sided false-alarm rate may be spent by a share of the trials.</summary>
/// <remarks>
/// Source: Lan and DeMets 1983, Biometrika 70:659 (from memory): 2 - 2 Phi(z_(1-alpha/2) / sqrt(t)), which resembles the bounds of O'Brien and Fleming, and alpha ln(1 + (e - 1) t), which
/// resembles those of Pocock. They resemble them; they are not the bounds of those two papers.
/// </remarks>
public static class AlphaSpending
{
    /// <summary>False-alarm rate spent by a share of the trials, without unit; <paramref name="alpha"/> at 1.</summary>
    /// <param name="spending">Function.</param>
    /// <param name="alpha">False-alarm rate of the whole test, 0 to 1.</param>
    /// <param name="share">Share of the trials, above 0 to 1.</param>
    public static double Spent(Spending spending, double alpha, double share) => spending == Spending.PocockType
        ? alpha * Math.Log(1 + (Math.E - 1) * share)
        : 2 * Normal.CDF(0, 1, Normal.InvCDF(0, 1, alpha / 2) / Math.Sqrt(share));
}
