using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Noise;

/// <summary>The default noise tables. Order-of-magnitude knowledge of the field, from memory: a study that has its own measurement should state it.</summary>
/// <remarks>
/// Total EEG: values consistent with several reviews and with 2.0 uV rms in 100-3000 Hz for a relaxed adult after rejection.
/// Brain in MEG: Hamalainen et al. 1993, Rev Mod Phys 65:413 (from memory), for a magnetometer at cryogenic distance.
/// </remarks>
public static class DefaultNoiseTables
{
    /// <summary>Derivation to which the EEG tables refer.</summary>
    public const string Derivation = "Cz-mastoids";

    /// <summary>Distance of the magnetometers to which the MEG table refers from the scalp [m].</summary>
    public const double MagnetometerGap = 0.020;

    // Up to here [Hz] the last slope of the brain's tables is part of them: "falling on", as far as the total goes.
    private const double FallingOnTo = 3000;

    /// <summary>Everything in the EEG of a relaxed adult, Cz against linked mastoids [V/sqrt(Hz)].</summary>
    public static LogLogTable EegTotal { get; } = Microvolts(
        (1, 4), (4, 3), (10, 4), (20, 0.85), (40, 0.25), (100, 0.10), (300, 0.035), (3000, 0.035));

    /// <summary>The brain's share of the EEG, Cz against linked mastoids [V/sqrt(Hz)]; the last slope goes on.</summary>
    public static LogLogTable EegBrain { get; } = FallingOn(Microvolts(
        (1, 4), (10, 4), (20, 0.8), (40, 0.15), (100, 0.03), (200, 0.01)));

    /// <summary>Brain in MEG, root-mean-square over magnetometers 20 mm from the scalp [T/sqrt(Hz)]; the last slope goes on.</summary>
    public static LogLogTable MegBrain { get; } = FallingOn(Table(Si.FromFemtotesla,
        (1, 40), (10, 30), (20, 25), (40, 10), (100, 4), (200, 1.5)));

    private static LogLogTable FallingOn(LogLogTable table) =>
        new([.. table.Frequencies.Select(f => (f, table.DensityAt(f)))]) { KnownTo = FallingOnTo };

    private static LogLogTable Microvolts(params (double Frequency, double Density)[] points) =>
        Table(Si.FromMicrovolts, points);

    private static LogLogTable Table(Func<double, double> toSi, params (double Frequency, double Density)[] points) =>
        new(Array.ConvertAll(points, p => (p.Frequency, toSi(p.Density))));
}
