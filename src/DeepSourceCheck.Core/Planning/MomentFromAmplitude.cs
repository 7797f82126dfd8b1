using System.Globalization;

using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Planning;

// MomentFromAmplitude.cs - the moment that reads a known amplitude.
//   g_d: gain at the derivation of dipole d in a direction of the verdict; g: the median of |g_d| over dipoles and directions, by nearest rank as counts are;
//   a = A / (k g), k the share of the peak that the study's filter and jitter leave (1 without a known course): an amplitude is read off an average that was filtered, and blurred by
//   jitter, already. One moment a region: what is known is one amplitude, and the spread over places stays visible in EEG and MEG alike.

/// <summary>Finds the moment of a region from an amplitude at the scalp.</summary>
internal static class MomentFromAmplitude
{
    /// <summary>The moment [A m].</summary>
    /// <param name="plan">Plan of the response at any moment.</param>
    /// <param name="head">Head.</param>
    /// <param name="source">Leadfields.</param>
    /// <param name="region">The region.</param>
    /// <param name="cancellation">Stops between chunks of dipoles.</param>
    /// <exception cref="InputException">The region reads nothing at the derivation.</exception>
    public static double Find(EvaluationPlan plan, IHead head, ILeadfieldSource source, FilledRegion region, CancellationToken cancellation)
    {
        AmplitudeChoice known = plan.Response.Amplitude!;
        DerivationMeasure measure = plan.Measures.OfType<DerivationMeasure>().First(m => m.Name == known.Derivation);
        EvaluationPlan reading = plan.Only(measure, plan.VerdictDirection);
        RegionTally tally = new RegionRun(reading, head, source).Run(region, null, null, cancellation);
        double power = tally.Cells[0][0].Power.NearestRankFromTop(0.5) ?? 0;
        double amplitude = Math.Sqrt(power * plan.NoiseFactor) * plan.Space.DerivationSd[measure.Index];
        double moment = plan.Response.Moment * known.Peak / amplitude;
        return double.IsFinite(moment) ? moment : throw new InputException(null, plan.Response.Key + ".amplitude.derivation", string.Create(CultureInfo.InvariantCulture,
            $"{region.Name} reads nothing at {known.Derivation} in the direction of the verdict ({Names.Of(reading.Directions[0])}): no moment gives {Si.ToMicrovolts(known.Peak):0.######} uV there; name a derivation that sees it, another direction, or state moment_nAm"));
    }
}
