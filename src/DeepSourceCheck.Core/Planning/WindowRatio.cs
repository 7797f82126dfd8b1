using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Planning;

/// <summary>Rms of a response over its window per peak amplitude, one number a response and region, from the rms that the study states for the EEG reading of the verdict, or else from the known waveform over its window, placed where it is largest.</summary>
internal static class WindowRatio
{
    /// <summary>k = stated rms / median peak amplitude (nearest rank, so that the median dipole has the stated rms exactly), without unit; 0 where that reading is silent or undefined.</summary>
    /// <param name="plan">What is read; EEG among it.</param>
    /// <param name="tally">What the region gave.</param>
    public static double Of(EvaluationPlan plan, RegionTally tally)
    {
        VarianceRatioChoice choice = plan.Targets.OfType<VarianceRatioChoice>().First();
        if (choice.WindowRms is not { } stated)
        {
            return plan.View.Waveform is { } waveform && plan.Response.Window is { } window ? waveform.WindowRmsPerPeak(window) : 0;
        }

        if (plan.EegMeasure is null)
        {
            return 0;
        }

        IMeasure? measure = plan.Measures.FirstOrDefault(m => m.Modality == Modality.Eeg && m.Name == plan.EegMeasure);
        double? amplitude;
        if (measure is DerivationMeasure derivation)
        {
            double sd = plan.Space.DerivationSd[derivation.Index] * Math.Sqrt(plan.NoiseFactor);
            amplitude = Math.Sqrt(tally.Cell(plan.VerdictDirection, measure).Power.NearestRankFromTop(0.5) ?? 0) * sd;
        }
        else
        {
            amplitude = Math.Sqrt(tally.Peaks[plan.Directions.ToList().IndexOf(plan.VerdictDirection)][0].Power.NearestRankFromTop(0.5) ?? 0) * plan.ReadMoment;
        }

        return amplitude > 0 ? stated / amplitude.Value : 0;
    }
}
