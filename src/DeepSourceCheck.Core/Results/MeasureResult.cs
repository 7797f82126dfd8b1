using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Results;

/// <summary>One modality, direction and measure in one region.</summary>
/// <param name="Modality">EEG, MEG or both.</param>
/// <param name="Direction">Which direction.</param>
/// <param name="Measure">`channel-mean`, `best-channel`, `matched-filter` or a derivation's name.</param>
/// <param name="Peak">Null for both together and where silent.</param>
/// <param name="SnrDb">SNR of one trial [dB].</param>
/// <param name="Targets">A result per target, in the study's order.</param>
/// <param name="Reason">Why figures are null, or null.</param>
/// <param name="AtLeak">For silent directions.</param>
public sealed record MeasureResult(
    Modality Modality, DirectionName Direction, string Measure, PeakAmplitude? Peak, Percentiles SnrDb,
    IReadOnlyList<TargetResult> Targets, string? Reason, LeakResult? AtLeak);

/// <summary>Largest absolute channel.</summary>
/// <param name="Value">Median over dipoles and directions, in <paramref name="Unit"/>.</param>
/// <param name="Unit">uV, fT or fT/cm.</param>
/// <param name="Channel">The channel that is most often the largest.</param>
public sealed record PeakAmplitude(double Value, string Unit, string Channel);

/// <summary>The figures at the published leak of realistic heads, shown beside a silent direction.</summary>
/// <param name="Leak">Amplitude relative to the strongest direction.</param>
/// <param name="SnrDb">SNR of one trial [dB].</param>
/// <param name="Targets">Counts.</param>
public sealed record LeakResult(double Leak, Percentiles SnrDb, IReadOnlyList<TargetResult> Targets);
