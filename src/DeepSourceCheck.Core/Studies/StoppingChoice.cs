namespace DeepSourceCheck.Core.Studies;

/// <summary>Analyses of the growing average that are planned in advance, at equal steps of trials.</summary>
/// <param name="Analyses">How many, the last included.</param>
/// <param name="Spending">How the false-alarm rate is spent over them.</param>
public sealed record StoppingChoice(int Analyses, Spending Spending);

/// <summary>How much of the false-alarm rate may be spent by a share of the trials.</summary>
public enum Spending
{
    /// <summary>Little early, nearly all at the end.</summary>
    ObrienFlemingType,

    /// <summary>Nearly evenly.</summary>
    PocockType,
}
