using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Noise.Recordings;

/// <summary>Noise of one trial in one band, from a recording.</summary>
public sealed record RecordedNoise
{
    /// <summary>File as the study names it.</summary>
    public required string File { get; init; }

    /// <summary>Band of the response [Hz]; the bin of a steady-state one.</summary>
    public required Band Band { get; init; }

    /// <summary>Band that was read [Hz]: that of the response, or a wider one about a bin, of which the bin has its share by width.</summary>
    public required Band BandRead { get; init; }

    /// <summary>Shrunk covariance of the electrodes against their average [V^2], row by row.</summary>
    public required double[] Covariance { get; init; }

    /// <summary>Number of independent samples, 2 B T of the band that was read and the time that was used.</summary>
    public required double IndependentSamples { get; init; }

    /// <summary>Weight of equal variance in the covariance, 0 to 1 (Ledoit and Wolf 2004); without unit.</summary>
    public required double Shrinkage { get; init; }

    /// <summary>Share of its promised power that a filter reaches on data that it has not seen.</summary>
    public required double HeldOutShare { get; init; }

    /// <summary>Time that was used [s].</summary>
    public required double SecondsUsed { get; init; }

    /// <summary>Recorded time of the stated part, without gaps [s].</summary>
    public required double SecondsRead { get; init; }

    /// <summary>Length of a segment [s].</summary>
    public required double SegmentSeconds { get; init; }

    /// <summary>Number of whole segments.</summary>
    public required int Segments { get; init; }

    /// <summary>Number of segments that exceeded the limit.</summary>
    public required int Rejected { get; init; }

    /// <summary>Share of the segments that exceeded the limit.</summary>
    public double RejectedShare => (double)Rejected / Segments;

    /// <summary>Median over the electrodes of the rms against the average [V].</summary>
    public required double MedianRms { get; init; }
}
