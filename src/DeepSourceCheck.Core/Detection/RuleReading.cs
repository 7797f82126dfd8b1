using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Detection;

/// <summary>What a rule knows of the reading that it is bound to.</summary>
/// <param name="Modality">EEG, MEG or both.</param>
/// <param name="Measure">Name of the measure.</param>
/// <param name="Rows">Number of independent rows that are read: the rank of the filter's covariance, 2 for a reading of each modality, 1 for a single reading.</param>
/// <param name="OnePoint">True where the reading is one voltage: a derivation or the best EEG channel.</param>
/// <param name="NoiseFactor">Power of the convention's noise over that of one point, without unit: 2 for peak-to-trough, else 1.</param>
/// <param name="KeptByFilter">Share of the ideal power that a filter keeps which was built from a covariance of finitely many samples; 1 for an exact one.</param>
public sealed record RuleReading(
    Modality Modality, string Measure, int Rows, bool OnePoint = false, double NoiseFactor = 1, double KeptByFilter = 1)
{
    /// <summary>Rms of the response over its window per peak amplitude, without unit, of the response and region; NaN where not known (yet).</summary>
    public double WindowPerPeak { get; init; } = double.NaN;

    /// <summary>True: the response is a sinusoid, read as power of one bin.</summary>
    public bool SteadyState { get; init; }

    /// <summary>A single reading with noise of standard deviation 1.</summary>
    public static RuleReading OfOneReading(Modality modality = Modality.Eeg) => new(modality, "", 1);

    /// <summary>The reading of a measure.</summary>
    /// <param name="measure">Measure.</param>
    /// <param name="space">Channels.</param>
    /// <param name="noiseFactor">Power of the convention's noise over that of one point.</param>
    public static RuleReading Of(IMeasure measure, SignalSpace space, double noiseFactor)
    {
        Modality modality = measure.Modality;
        return measure switch
        {
            MatchedFilterMeasure => new(modality, measure.Name, space.Rank(modality), NoiseFactor: noiseFactor, KeptByFilter: space.KeptByFilter(modality)),
            SumMeasure sum => new(modality, measure.Name, sum.Parts.Sum(p => Of(p, space, noiseFactor).Rows), NoiseFactor: noiseFactor),
            PairMeasure => new(modality, measure.Name, 2, NoiseFactor: noiseFactor),
            DerivationMeasure => new(modality, measure.Name, 1, OnePoint: true, noiseFactor),
            BestChannelMeasure => new(modality, measure.Name, 1, OnePoint: modality == Modality.Eeg, NoiseFactor: noiseFactor),
            _ => new(modality, measure.Name, 1, NoiseFactor: noiseFactor),
        };
    }
}
