namespace DeepSourceCheck.Core.Noise;

/// <summary>Noise of one trial in one response's band.</summary>
public sealed class NoiseCovariance
{
    /// <summary>Number of electrodes; 0 without EEG.</summary>
    public required int EegRows { get; init; }

    /// <summary>Number of MEG channels; 0 without MEG.</summary>
    public required int MegRows { get; init; }

    /// <summary>Covariance of the unreferenced electrodes [V^2], row by row.</summary>
    public required double[] Eeg { get; init; }

    /// <summary>Covariance of the MEG channels [T^2, (T/m)^2 or mixed], row by row.</summary>
    public required double[] Meg { get; init; }

    /// <summary>Covariance between electrodes and MEG channels [V T, V T/m], electrodes x channels, row by row; null where independent.</summary>
    public double[]? Cross { get; init; }

    /// <summary>Number of independent samples from which the EEG covariance was estimated; null for exact.</summary>
    public double? EegSamples { get; init; }

    /// <summary>Share of its promised power that a filter reaches on data that it has not seen, where the EEG covariance was shrunk and <see cref="EegSamples"/> says nothing of it; null for others.</summary>
    public double? EegHeldOut { get; init; }

    /// <summary>Number of independent samples from which the MEG covariance was estimated; null for exact.</summary>
    public double? MegSamples { get; init; }
}
