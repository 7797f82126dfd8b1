namespace DeepSourceCheck.Core.Noise;

/// <summary>The brain's share of the noise: the default tables, or the study's own.</summary>
/// <param name="Eeg">Amplitude density in the tables' derivation, Cz against linked mastoids [V/sqrt(Hz)].</param>
/// <param name="Meg">Root-mean-square amplitude density over magnetometers 20 mm from the scalp [T/sqrt(Hz)].</param>
/// <param name="EegName">What the EEG table is called in messages.</param>
/// <param name="MegName">What the MEG table is called in messages.</param>
public sealed record BrainTables(LogLogTable Eeg, LogLogTable Meg, string EegName, string MegName)
{
    /// <summary>The default tables.</summary>
    public static BrainTables Default { get; } =
        new(DefaultNoiseTables.EegBrain, DefaultNoiseTables.MegBrain, "the default table of the brain in EEG", "the default table of the brain in MEG");

    /// <summary>Both tables times a factor: a brain that is quieter or louder as a whole.</summary>
    /// <param name="factor">Factor of the amplitude densities.</param>
    public BrainTables Scaled(double factor) => factor == 1 ? this : this with { Eeg = Eeg.Scaled(factor), Meg = Meg.Scaled(factor) };
}
