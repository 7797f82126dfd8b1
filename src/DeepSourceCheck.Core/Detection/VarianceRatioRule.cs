using System.Globalization;

using DeepSourceCheck.Core.Numerics;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Detection;

/// <summary>
/// The F-ratio rule of averaged evoked responses: variance of the average over a window against that of its noise at one point. With S the rms of the response over the window and s that of
/// one trial's noise, SNR = N S^2/s^2; the ratio is F(d1, d2) with noncentrality d1 SNR, its expectation (1 + SNR) d2/(d2 - 2).
/// </summary>
/// <remarks>
/// S = k A: the ratio k of window rms to peak is one number a response and region, so that the rule holds at every dipole and reading; SNR of one trial = k^2 c^2 P, c^2 the noise power of the
/// convention. A locked artefact is taken to have the response's shape. Source: Elberling and Don 1984, Scandinavian Audiology 13:187 (from memory).
/// </remarks>
public sealed class VarianceRatioRule : ITargetRule
{
    private readonly VarianceRatioChoice _choice;
    private readonly RuleReading _reading;
    private readonly double _perPower;

    /// <param name="choice">As stated.</param>
    /// <param name="reading">What is read, with the ratio of window rms to peak.</param>
    public VarianceRatioRule(VarianceRatioChoice choice, RuleReading reading)
    {
        _choice = choice;
        _reading = reading;
        _perPower = reading.WindowPerPeak * reading.WindowPerPeak * reading.NoiseFactor;
        Critical = choice.Critical ?? NoncentralF.Critical(choice.Alpha!.Value, choice.Above, choice.Below);
        RequiredSnr = choice.Power is { } power
            ? NoncentralF.Noncentrality(Critical, choice.Above, choice.Below, power) / choice.Above
            : Critical * (choice.Below - 2) / choice.Below - 1;
    }

    /// <summary>Critical value of the ratio, without unit.</summary>
    public double Critical { get; }

    /// <summary>SNR of the average (variances, without unit) that the target asks for.</summary>
    public double RequiredSnr { get; }

    /// <inheritdoc/>
    public string Name => Names.VarianceRatio;

    /// <inheritdoc/>
    public string Description => string.Create(CultureInfo.InvariantCulture,
        $"variance ratio {(_choice.Power is { } p ? $"above {Critical:0.###} with power {p:0.###}" : $"expected at {Critical:0.###}")}, F({_choice.Above:0.#}, {_choice.Below:0.#})");

    /// <inheritdoc/>
    public string? Absent => _reading.SteadyState ? "the variance ratio is of a transient response over its window; a steady-state one is tested at its frequency: use detection"
        : _reading.WindowPerPeak == 0
        ? "the response's rms over the window is stated for the EEG reading of the verdict, which is silent or undefined in this region: it cannot be carried over" : null;

    /// <inheritdoc/>
    public double EffectivePower(double power, double artefact, double inverseVariance = double.NaN)
    {
        if (artefact == 0)
        {
            return power;
        }

        double d = Math.Max(0, Math.Sqrt(power) - Math.Sqrt(artefact));
        return d * d;
    }

    /// <inheritdoc/>
    public double Trials(double effectivePower) => RequiredSnr / (_perPower * effectivePower);

    /// <inheritdoc/>
    public double? Probability(double power, double artefact, double trials) =>
        NoncentralF.Survival(Critical, _choice.Above, _choice.Below, _choice.Above * trials * _perPower * EffectivePower(power, artefact));

    /// <inheritdoc/>
    public double SmallestScale(double power, double artefact, long sessionTrials) =>
        (Math.Sqrt(RequiredSnr / (_perPower * sessionTrials)) + Math.Sqrt(artefact)) / Math.Sqrt(power);

    /// <inheritdoc/>
    public IReadOnlyList<DerivedNumber> Chain(double power, double artefact, double inverseVariance = double.NaN)
    {
        const string Paper = "Elberling and Don 1984";
        var lines = new List<DerivedNumber>();
        if (_choice.WindowRms is { } stated)
        {
            double window = Si.ToMicrovolts(stated), peak = window / _reading.WindowPerPeak;
            lines.AddRange(
            [
                new("W", "rms of the response over the window at the EEG reading of the verdict", window, "uV", "", "target.variance_ratio.window_rms_uV", null),
                new("Am", "median amplitude at that reading in this region", peak, "uV", "", "leadfields of all dipoles", Grade.Derived),
                new("k", "window rms per peak amplitude, for every dipole and reading of the region", window / peak, "", "W / Am", "one waveform everywhere", Grade.Derived),
            ]);
        }
        else
        {
            lines.Add(new("k", "window rms per peak amplitude", _reading.WindowPerPeak, "", "", "the known waveform after filter and jitter, over responses.window_ms placed where it is largest", Grade.Derived));
        }

        lines.AddRange(
        [
            new("d1", "degrees of freedom of the average's variance", _choice.Above, "", "", "target.variance_ratio.degrees", null),
            new("d2", "degrees of freedom of the noise's variance", _choice.Below, "", "", "target.variance_ratio.degrees", null),
        ]);
        if (_choice.Critical is null)
        {
            lines.Add(new("alpha", "false-alarm rate", _choice.Alpha!.Value, "", "", "target.variance_ratio.alpha", null));
            lines.Add(new("F", "critical value of F(d1, d2)", Critical, "", "upper_F(alpha, d1, d2)", "F distribution", Grade.Derived));
        }
        else
        {
            lines.Add(new("F", "critical value", Critical, "", "", "target.variance_ratio.critical", null));
        }

        if (_choice.Power is { } asked)
        {
            lines.Add(new("power", "probability of passing it", asked, "", "", "target.variance_ratio.power", null));
            lines.Add(new("lambda", "noncentrality that passes it with that power", RequiredSnr * _choice.Above, "", "noncentrality_F(F, d1, d2, power)", "noncentral F distribution", Grade.Derived));
            lines.Add(new("Q", "SNR of the average that is asked for", RequiredSnr, "", "lambda / d1", Paper, Grade.Memory));
        }
        else
        {
            lines.Add(new("Q", "SNR of the average at which the expected ratio equals F", RequiredSnr, "", "F (d2 - 2) / d2 - 1", Paper, Grade.Memory));
        }

        if (artefact > 0)
        {
            lines.Add(new("R", "(locked artefact / noise of one trial)^2", artefact, "", "", "responses.locked_artefact", null));
        }

        string d = artefact > 0 ? "(sqrt(P) - sqrt(R))^2" : "P";
        lines.Add(new("N", "accepted trials", TrialCount.Ceiling(Trials(EffectivePower(power, artefact))) ?? double.PositiveInfinity, "", $"ceil(Q / ((k c)^2 {d}))", Paper, Grade.Memory));
        return lines;
    }
}
