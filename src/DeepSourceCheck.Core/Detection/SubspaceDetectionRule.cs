using System.Globalization;

using DeepSourceCheck.Core.Numerics;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Detection;

/// <summary>Detection anywhere in p dimensions at known covariance: N times the squared whitened average is noncentral chi-square, noncentrality N P, so N = lambda / P, rounded up.</summary>
/// <remarks>Two-sided in every dimension. Source: Kay 1998, Fundamentals of Statistical Signal Processing II, ch. 7 (linear model with unknown amplitudes; from memory).</remarks>
public sealed class SubspaceDetectionRule : DetectionTest
{
    private readonly int _rows;

    /// <param name="alpha">False-alarm rate over all looks, 0 to 1.</param>
    /// <param name="power">Probability of detection, 0 to 1.</param>
    /// <param name="looks">Independent looks, at least 1.</param>
    /// <param name="rows">Dimensions p, at least 1.</param>
    public SubspaceDetectionRule(double alpha, double power, double looks, int rows)
        : base(alpha, power, looks)
    {
        _rows = rows;
        Critical = NoncentralChiSquare.Critical(AlphaOfOne, rows);
        Noncentrality = NoncentralChiSquare.Noncentrality(Critical, rows, power);
    }

    /// <summary>Value that chance exceeds with the false-alarm rate of one look, without unit.</summary>
    public double Critical { get; }

    /// <summary>Noncentrality that exceeds it with the power asked for, without unit.</summary>
    public double Noncentrality { get; }

    private protected override string Known => string.Create(CultureInfo.InvariantCulture, $"any pattern in {_rows} {(_rows == 1 ? "dimension" : "dimensions")}, covariance known");

    /// <inheritdoc/>
    public override double Trials(double effectivePower) => Noncentrality / effectivePower;

    private protected override double PowerOf(double effectivePower, double trials) => NoncentralChiSquare.Survival(Critical, _rows, trials * effectivePower);

    private protected override double RequiredPower(double trials) => Noncentrality / trials;

    private protected override void AddLines(List<DerivedNumber> lines, double effectivePower, string symbol)
    {
        lines.Add(new("p", "dimensions that the response may point to", _rows, "", "", "target.detection.topography; independent rows that are read", null));
        lines.Add(new("X", "critical value of chi-square with p degrees of freedom", Critical, "", "upper_chi2(alpha / K, p)", "chi-square distribution", Grade.Derived));
        lines.Add(new("lambda", "noncentrality that exceeds it with that power", Noncentrality, "", "noncentrality_chi2(X, p, power)", "noncentral chi-square distribution", Grade.Derived));
        lines.Add(new("N", "accepted trials", Count(Trials(effectivePower)), "", $"ceil(lambda / {symbol})", "Kay 1998 II, ch. 7", Grade.Memory));
    }
}
