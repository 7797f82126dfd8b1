using System.Globalization;

using DeepSourceCheck.Core.Numerics;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Detection;

/// <summary>Detection anywhere in p dimensions with the covariance estimated from the same N trials: Hotelling's T2, (N - p)/(p (N - 1)) T2 ~ F(p, N - p) with noncentrality N P.</summary>
/// <remarks>
/// The smallest N above p with the power asked for. The test pays for its covariance through its degrees of freedom, so that what a filter loses which was built from finitely many samples
/// is given back to P: it would be paid twice. Source: Hotelling 1931, Annals of Mathematical Statistics 2:360 (from memory).
/// </remarks>
public sealed class HotellingRule : DetectionTest
{
    private readonly int _rows;
    private readonly double _kept, _known;

    /// <param name="alpha">False-alarm rate over all looks, 0 to 1.</param>
    /// <param name="power">Probability of detection, 0 to 1.</param>
    /// <param name="looks">Independent looks, at least 1.</param>
    /// <param name="rows">Dimensions p, at least 1.</param>
    /// <param name="keptByFilter">Share of the ideal power that stands in P: 1 unless a filter was built from finitely many samples.</param>
    public HotellingRule(double alpha, double power, double looks, int rows, double keptByFilter = 1)
        : base(alpha, power, looks)
    {
        _rows = rows;
        _kept = keptByFilter;
        _known = NoncentralChiSquare.Noncentrality(NoncentralChiSquare.Critical(AlphaOfOne, rows), rows, power);
    }

    private protected override string Known => string.Create(CultureInfo.InvariantCulture,
        $"any pattern in {_rows} {(_rows == 1 ? "dimension" : "dimensions")}, covariance estimated from the same trials");

    /// <summary>T2 that chance exceeds with the false-alarm rate of one look, without unit.</summary>
    /// <param name="trials">Accepted trials N, above p.</param>
    public double Critical(double trials) => NoncentralF.Critical(AlphaOfOne, _rows, trials - _rows) * _rows * (trials - 1) / (trials - _rows);

    /// <inheritdoc/>
    public override double Trials(double effectivePower) =>
        effectivePower > 0 ? CountSearch.Smallest(n => PowerOf(effectivePower, n), Power, _rows + 1, _known * _kept / effectivePower) : double.PositiveInfinity;

    private protected override double PowerOf(double effectivePower, double trials)
    {
        double below = trials - _rows;
        return below >= 1 ? NoncentralF.Survival(NoncentralF.Critical(AlphaOfOne, _rows, below), _rows, below, trials * effectivePower / _kept) : 0;
    }

    private protected override double RequiredPower(double trials)
    {
        double below = trials - _rows;
        return below > 0 ? NoncentralF.Noncentrality(NoncentralF.Critical(AlphaOfOne, _rows, below), _rows, below, Power) * _kept / trials : double.PositiveInfinity;
    }

    private protected override void AddLines(List<DerivedNumber> lines, double effectivePower, string symbol)
    {
        lines.Add(new("p", "dimensions that the response may point to", _rows, "", "", "target.detection.topography; independent rows that are read", null));
        if (_kept < 1)
        {
            lines.Add(new("h", "share that a filter keeps which was built from the covariance's samples, in P; T2 builds none", _kept, "", "", "Reed, Mallett and Brennan 1974", Grade.Memory));
            symbol += " / h";
        }

        double count = Count(Trials(effectivePower));
        lines.Add(new("N", "accepted trials: the smallest N above p at which F(p, N - p) with noncentrality N P passes its critical value with that power", count, "",
            $"hotelling(alpha / K, power, p, {symbol})", "Hotelling 1931", Grade.Memory));
        if (double.IsFinite(count))
        {
            lines.Add(new("F", "critical value of F(p, N - p) at that N", NoncentralF.Critical(AlphaOfOne, _rows, count - _rows), "", "upper_F(alpha / K, p, N - p)", "F distribution", Grade.Derived));
            lines.Add(new("lambda", "noncentrality at that N", count * effectivePower / _kept, "", $"N {symbol}", "definition", Grade.Derived));
            lines.Add(new("reached", "power at that N", PowerOf(effectivePower, count), "", "power_F(F, p, N - p, lambda)", "noncentral F distribution", Grade.Derived));
        }
    }
}
