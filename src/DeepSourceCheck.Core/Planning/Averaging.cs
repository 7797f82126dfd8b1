using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Planning;

/// <summary>How the trials of one verdict average at the protocol's rate.</summary>
internal static class Averaging
{
    private const string NoSpectrum = "the noise is stated per trial, without a spectrum: how far trials at this rate are independent is not known";

    private const string OneRecording = "trials of a steady-state response follow each other as one recording; the noise of its bin is independent from trial to trial";

    private const string NoSingleReading = "what is read is no single channel: how far its trials at this rate are independent is not computed";

    /// <summary>Effective numbers of trials, or why they are not known; null without a protocol or count.</summary>
    /// <param name="plan">What is read.</param>
    /// <param name="noise">Noise of the study.</param>
    /// <param name="witness">The dipole at the median, or null.</param>
    /// <param name="count">The verdict's count, or null.</param>
    public static AveragingResult? Of(EvaluationPlan plan, NoiseModel noise, MedianWitness? witness, long? count)
    {
        if (plan.Protocol is not { } protocol || witness is null || count is not { } trials)
        {
            return null;
        }

        if (plan.Response.Steady is not null)
        {
            return new(null, null, null, OneRecording);
        }

        if (witness.Read is not (DerivationMeasure or BestChannelMeasure))
        {
            return new(null, null, null, NoSingleReading);
        }

        double[]? weights = Weights(plan, witness);
        if (noise.Density(weights, witness.MegChannel) is not { } density)
        {
            return new(null, null, null, NoSpectrum);
        }

        Band band = plan.Response.Band;
        IReadOnlyList<double> breaks = [.. noise.Terms.SelectMany(t => t.Breakpoints)];
        double Share(double n, double jitter) =>
            RepeatedAverage.EffectiveShare(density, band.Low, band.High, breaks, protocol.Rate, n, protocol.RejectedFraction, jitter);
        double stated = protocol.IntervalJitter ?? 0;
        return new(Share(trials, stated), plan.SessionTrials is > 0 and { } session ? Share(session, stated) : null, protocol.IntervalJitter is null ? null : Share(trials, 0), null);
    }

    /// <summary>Weights over the electrodes of the EEG channel that was read; null for MEG.</summary>
    public static double[]? Weights(EvaluationPlan plan, MedianWitness witness) => witness.Read.Modality != Modality.Eeg ? null
        : witness.Read is DerivationMeasure d ? plan.Space.Derivations!.Weights(d.Index)
        : plan.Space.Reference!.Weights(plan.Space.EegChannels[witness.EegChannel]);
}
