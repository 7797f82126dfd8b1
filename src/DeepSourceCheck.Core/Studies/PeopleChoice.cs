namespace DeepSourceCheck.Core.Studies;

/// <summary>What a study of several people asks; the moment of each differs from the mean one.</summary>
public sealed record PeopleChoice
{
    /// <summary>Standard deviation of the moment between people over its mean, without unit.</summary>
    public required double Spread { get; init; }

    /// <summary>People whose recordings are analysed, in each group; null where the study asks for their number alone.</summary>
    public int? Participants { get; init; }

    /// <summary>Share of those invited who are lost.</summary>
    public double DropOut { get; init; }

    /// <summary>False-alarm rate of the two-sided test, without unit.</summary>
    public required double Alpha { get; init; }

    /// <summary>Probability that the test finds the effect.</summary>
    public required double Power { get; init; }

    /// <summary>Difference between the mean moments of two groups as a share of the mean moment, without unit; null: one group against no response.</summary>
    public double? GroupDifference { get; init; }
}
