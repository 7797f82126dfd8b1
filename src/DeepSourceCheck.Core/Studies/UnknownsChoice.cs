namespace DeepSourceCheck.Core.Studies;

/// <summary>How far inputs may be off.</summary>
public sealed record UnknownsChoice
{
    /// <summary>Innermost conductivity over the skull's, without unit; null: not varied.</summary>
    public Spread? SkullRatio { get; init; }

    /// <summary>Factor on every noise amplitude, without unit; null: not varied.</summary>
    public Spread? NoiseFactor { get; init; }

    /// <summary>Standard deviation of the head's place in the array, each axis [m].</summary>
    public double HeadShift { get; init; }

    /// <summary>Standard deviation of the sphere's centre, each axis [m].</summary>
    public double CentreShift { get; init; }

    /// <summary>Number of draws.</summary>
    public int Samples { get; init; }
}

// Spread - a split lognormal distribution.
//   ln x = ln typical + sigma z, z standard normal, with sigma = ln(typical/low)/z95 below and ln(high/typical)/z95 above: the median is `typical`, the 5 and 95 % points are `low` and `high`.

/// <summary>A positive quantity that is not known: a split lognormal distribution.</summary>
/// <param name="Low">5 % point, positive, in the unit of the quantity.</param>
/// <param name="Typical">Median, in the unit of <see cref="Low"/>, at least <paramref name="Low"/>.</param>
/// <param name="High">95 % point, in the unit of <see cref="Low"/>, at least <paramref name="Typical"/>.</param>
public sealed record Spread(double Low, double Typical, double High)
{
    /// <summary>95 % point of the standard normal distribution, without unit.</summary>
    public const double Z95 = 1.6448536269514722;

    /// <summary>The value at a normal score, in the unit of the points.</summary>
    /// <param name="z">Standard normal score, without unit.</param>
    public double At(double z) => Typical * Math.Exp(z / Z95 * (z < 0 ? Math.Log(Typical / Low) : Math.Log(High / Typical)));
}
