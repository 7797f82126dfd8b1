using DeepSourceCheck.Core.Noise.Recordings;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Results;

/// <summary>All regions of one response.</summary>
/// <param name="Response">As stated.</param>
/// <param name="Regions">One result a region; a single one where regions act together.</param>
public sealed record ResponseResult(Response Response, IReadOnlyList<RegionResult> Regions)
{
    /// <summary>Accepted trials that the session affords this response: those of a steady-state one come no faster than they are long; null without a session.</summary>
    public long? SessionTrials { get; init; }

    /// <summary>What filter and jitter leave of it; null where nothing is known of its course in time.</summary>
    public WaveformResult? Waveform { get; init; }

    /// <summary>Noise over frequency at the readings of the first region's verdicts, EEG then MEG.</summary>
    public IReadOnlyList<ReadingSpectrum> Spectra { get; init; } = [];

    /// <summary>What the EEG noise was taken from where a recording is stated; null for others.</summary>
    public RecordedNoise? Recording { get; init; }
}
