namespace DeepSourceCheck.Core.Results;

/// <summary>What the average shows of a response whose course in time is known.</summary>
/// <param name="Description">What the waveform is.</param>
/// <param name="Jitter">Standard deviation of the latency [s]: jitter of the response and of a free trigger.</param>
/// <param name="Kept">Share of the peak that filter and jitter leave: what amplitude_ratio and SNR are read on.</param>
/// <param name="Energy">Energy of the waveform of peak 1 after filter and jitter [s]: what detection stands on; null where the frequency alone is known.</param>
public sealed record WaveformResult(string Description, double Jitter, double Kept, double? Energy)
{
    /// <summary>Loss of the peak [dB]; negative where a filter makes it larger.</summary>
    public double LossDb => -20 * Math.Log10(Kept);
}
