namespace DeepSourceCheck.Core.Noise.Recordings;

/// <summary>A baseline as it was recorded: stretches without gaps, one row an electrode.</summary>
public sealed record Recording
{
    /// <summary>Samples of each channel in a second [Hz].</summary>
    public required double SamplingRate { get; init; }

    /// <summary>Stretches in the order of time.</summary>
    public required IReadOnlyList<RecordedStretch> Stretches { get; init; }

    /// <summary>Number of samples of each channel that stand at the end of its digital range: they may be clipped.</summary>
    public required IReadOnlyList<long> AtLimit { get; init; }

    /// <summary>Recorded time, without gaps [s].</summary>
    public double Seconds => Stretches.Sum(s => s.Values[0].Length) / SamplingRate;
}

/// <summary>A stretch without gaps.</summary>
/// <param name="Start">Time of its first sample [s] after the first of the file.</param>
/// <param name="Values">Potentials [V], channel by channel, sample by sample.</param>
public sealed record RecordedStretch(double Start, double[][] Values);
