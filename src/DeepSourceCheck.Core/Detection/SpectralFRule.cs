using System.Globalization;

using DeepSourceCheck.Core.Numerics;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Detection;

/// <summary>
/// A steady-state response against neighbouring bins: the power at its frequency over the mean of 120 bins follows F(2, 240), noncentrality N P with P = A^2 T/density of one trial of T
/// seconds. N is the noncentrality that the power asks for over P, rounded up.
/// </summary>
/// <remarks>
/// Beside it the magnitude-squared coherence over N trials, m: (N - 1) m/(1 - m) follows F(2, 2N - 2) with the same noncentrality; critical m = 1 - alpha^(1/(N-1)).
/// K looks are searched (Bonferroni). A locked artefact may oppose the response: sqrt(P) - sqrt(R) is left, as in detection.
/// Source: Dobie and Wilson 1996, Ear Hear 17:173 (from memory); neighbouring bins: the study file's page.
/// </remarks>
public sealed class SpectralFRule : ITargetRule
{
    /// <summary>Neighbouring bins with which the response's is compared.</summary>
    public const int Neighbours = 120;

    private const long MostTrials = 1L << 40;

    private readonly double _alpha, _power, _looks, _critical, _noncentrality;

    /// <param name="alpha">False-alarm rate over all looks, 0 to 1.</param>
    /// <param name="power">Probability of detection, 0 to 1.</param>
    /// <param name="looks">Independent looks, at least 1.</param>
    public SpectralFRule(double alpha, double power, double looks)
    {
        (_alpha, _power, _looks) = (alpha, power, looks);
        _critical = NoncentralF.Critical(alpha / looks, 2, 2 * Neighbours);
        _noncentrality = NoncentralF.Noncentrality(_critical, 2, 2 * Neighbours, power);
    }

    /// <inheritdoc/>
    public string Name => Names.Detection;

    /// <inheritdoc/>
    public string Description => string.Create(CultureInfo.InvariantCulture,
        $"F test against {Neighbours} neighbouring bins at alpha {_alpha:0.#####}, power {_power:0.###}, {_looks:0.#} {(_looks == 1 ? "look" : "looks")}");

    /// <inheritdoc/>
    public double EffectivePower(double power, double artefact, double inverseVariance = double.NaN)
    {
        double d = artefact == 0 ? Math.Sqrt(power) : Math.Max(0, Math.Sqrt(power) - Math.Sqrt(artefact));
        return artefact == 0 ? power : d * d;
    }

    /// <inheritdoc/>
    public double Trials(double effectivePower) => _noncentrality / effectivePower;

    /// <inheritdoc/>
    public double? Probability(double power, double artefact, double trials) =>
        NoncentralF.Survival(_critical, 2, 2 * Neighbours, trials * EffectivePower(power, artefact));

    /// <inheritdoc/>
    public double SmallestScale(double power, double artefact, long sessionTrials) =>
        (Math.Sqrt(_noncentrality / sessionTrials) + Math.Sqrt(artefact)) / Math.Sqrt(power);

    /// <summary>Trials after which the coherence over trials passes its critical value with the power asked for; null beyond counting.</summary>
    /// <param name="effectivePower">Power SNR of one trial.</param>
    public long? CoherenceTrials(double effectivePower)
    {
        bool Passes(long n) => NoncentralF.Survival((n - 1) * (Math.Pow(_alpha / _looks, -1.0 / (n - 1)) - 1), 2, 2 * (n - 1), n * effectivePower) >= _power;
        if (!(effectivePower > 0))
        {
            return null;
        }

        long high = 2;
        while (!Passes(high))
        {
            high *= 2;
            if (high > MostTrials)
            {
                return null;
            }
        }

        long low = high / 2;
        while (high - low > 1)
        {
            long middle = low + (high - low) / 2;
            (low, high) = Passes(middle) ? (low, middle) : (middle, high);
        }

        return high;
    }

    /// <inheritdoc/>
    public IReadOnlyList<DerivedNumber> Chain(double power, double artefact, double inverseVariance = double.NaN)
    {
        double effective = EffectivePower(power, artefact);
        var lines = new List<DerivedNumber>
        {
            new("alpha", "false-alarm rate over all looks", _alpha, "", "", "target.detection.alpha", null),
            new("K", "independent looks", _looks, "", "", "target.detection.looks", null),
            new("power", "probability of detection", _power, "", "", "target.detection.power", null),
            new("F", $"critical value of F(2, {2 * Neighbours}) at alpha / K", _critical, "", "", "F distribution", Grade.Derived),
            new("lambda", "noncentrality at which it is exceeded with the power asked for", _noncentrality, "", "", "noncentral F distribution; Dobie and Wilson 1996", Grade.Memory),
        };
        if (CoherenceTrials(effective) is { } trials)
        {
            lines.Add(new("Nc", "beside it, trials by coherence over trials", trials, "", "", "(Nc - 1) m/(1 - m) follows F(2, 2 Nc - 2), noncentrality Nc P", Grade.Memory));
            lines.Add(new("m", "coherence (squared magnitude) that is critical for so many trials", 1 - Math.Pow(_alpha / _looks, 1.0 / (trials - 1)), "", "1 - (alpha / K)^(1 / (Nc - 1))", "Dobie and Wilson 1996", Grade.Memory));
        }

        if (artefact > 0)
        {
            lines.Add(new("R", "(locked artefact / noise of one trial)^2", artefact, "", "", "responses.locked_artefact", null));
        }

        double? count = TrialCount.Ceiling(Trials(effective));
        lines.Add(new("N", "accepted trials", count ?? double.PositiveInfinity, "", $"ceil(lambda / {(artefact > 0 ? "(sqrt(P) - sqrt(R))^2" : "P")})", "Dobie and Wilson 1996", Grade.Memory));
        return lines;
    }
}
