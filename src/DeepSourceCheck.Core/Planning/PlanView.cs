using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Waveforms;

namespace DeepSourceCheck.Core.Planning;

/// <summary>What a plan reads of a response whose course in time is known, and by what filters.</summary>
public sealed record PlanView
{
    /// <summary>Share of the peak that filter and jitter leave; 1 where nothing is known of them.</summary>
    public double Kept { get; init; } = 1;

    /// <summary>The waveform as the average shows it; null where none is known.</summary>
    public RecordedWaveform? Waveform { get; init; }

    /// <summary>Standard deviation of the latency that is in <see cref="Kept"/> [s].</summary>
    public double Jitter { get; init; }

    /// <summary>For what filters were built by mistake: only they are read then; null for all other measures.</summary>
    public FilterErrors? Errors { get; init; }
}
