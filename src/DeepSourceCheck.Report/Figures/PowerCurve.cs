using DeepSourceCheck.Core.Detection;

namespace DeepSourceCheck.Report.Figures;

/// <summary>Power of the one-sided detection test against trials, by SNR in decibels: the core's <see cref="DetectionRule"/> at any power.</summary>
/// <param name="Alpha">False-alarm rate over all looks.</param>
/// <param name="Looks">Number of independent looks.</param>
public sealed record PowerCurve(double Alpha, double Looks)
{
    // The power that a rule asks for plays no part in the power that it has.
    private readonly DetectionRule _test = new(Alpha, 0.5, Looks);

    /// <summary>Power at <paramref name="trials"/> of a response with <paramref name="snrDb"/> in one trial [dB].</summary>
    public double At(double trials, double snrDb) => _test.PowerOf(Math.Pow(10, snrDb / 10), trials);

    /// <summary>The trials (not rounded) at which the power, above <see cref="Alpha"/>, is reached.</summary>
    public double Trials(double power, double snrDb) => new DetectionRule(Alpha, power, Looks).Trials(Math.Pow(10, snrDb / 10));
}
