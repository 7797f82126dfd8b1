using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Noise;

/// <summary>The noise of a study at single frequencies: the covariance of each term at unit power, computed once, and its power at a frequency.</summary>
/// <remarks>
/// Noise that is stated per trial or recorded counts as white over the response's band: one term with power 1/width. Where a term's power is negative at a frequency (a remainder where tables
/// cross) it counts as none there.
/// </remarks>
public sealed class NoiseSpectrum
{
    private readonly INoiseTerm?[] _terms;
    private readonly double _width;

    /// <param name="noise">The noise.</param>
    /// <param name="low">Lower edge of the band [Hz].</param>
    /// <param name="high">Upper edge of the band [Hz].</param>
    public NoiseSpectrum(NoiseModel noise, double low, double high)
    {
        _width = high - low;
        INoiseTerm[] terms = [.. noise.Terms.Where(t => (t.Eeg is not null && !noise.EegIsStated) || (t.Meg is not null && noise.MegPerTrial is null))];
        bool stated = (noise.EegRows > 0 && noise.EegIsStated) || (noise.MegRows > 0 && noise.MegPerTrial is not null);
        INoiseTerm?[] own = [.. terms];
        _terms = stated ? [.. own, null] : own;
        Units = [.. terms.Select(t => noise.AtUnitPower(t)), .. stated ? new[] { Stated(noise, new Band(low, high)) } : []];
        Kinks = [.. terms.SelectMany(t => t.Breakpoints).Distinct()];
    }

    /// <summary>Covariance of each term at unit power: in the unit of the term, cross terms where it correlates EEG and MEG.</summary>
    public IReadOnlyList<NoiseCovariance> Units { get; }

    /// <summary>Frequencies [Hz] at which a power has a kink.</summary>
    public IReadOnlyList<double> Kinks { get; }

    /// <summary>Power of each of <see cref="Units"/> at a frequency [1/Hz].</summary>
    /// <param name="frequency">Frequency [Hz].</param>
    public NoisePower[] At(double frequency) => [.. _terms.Select(t => t?.At(frequency) is { } p
        ? new NoisePower(Math.Max(0, p.Eeg), Math.Max(0, p.Meg), p.Eeg > 0 && p.Meg > 0 ? p.Cross : 0) : new NoisePower(1 / _width, 1 / _width, 0))];

    private static NoiseCovariance Stated(NoiseModel noise, Band band) => new()
    {
        EegRows = noise.EegRows,
        MegRows = noise.MegRows,
        Eeg = noise.EegStated(band) ?? new double[noise.EegRows * noise.EegRows],
        Meg = noise.MegPerTrial ?? new double[noise.MegRows * noise.MegRows],
    };
}
