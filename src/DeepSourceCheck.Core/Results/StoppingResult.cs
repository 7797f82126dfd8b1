using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Results;

/// <summary>Analyses planned while trials come in, at the bounds that keep the false-alarm rate.</summary>
/// <param name="Spending">How the rate is spent.</param>
/// <param name="Rows">One an analysis.</param>
/// <param name="Most">Trials where no analysis before the last stops.</param>
/// <param name="Expected">Mean number of trials, without unit, with the response as stated.</param>
/// <param name="ExpectedWithout">Mean number of trials, without unit, where there is no response.</param>
/// <param name="MostMinutes">The first in minutes of recording; null without a protocol.</param>
/// <param name="ExpectedMinutes">The second in minutes of recording; null likewise.</param>
/// <param name="FitsSession">Whether the most fit the session; null without one.</param>
public sealed record StoppingResult(
    Spending Spending, IReadOnlyList<AnalysisRow> Rows, long Most, double Expected, double ExpectedWithout, double? MostMinutes, double? ExpectedMinutes, bool? FitsSession);

/// <summary>One planned analysis.</summary>
/// <param name="Trials">Accepted trials at which it is made.</param>
/// <param name="Bound">It stops where the average passes this many of its standard deviations, without unit.</param>
/// <param name="Spent">False-alarm rate spent until then, without unit.</param>
/// <param name="Stops">Probability of stopping here, with the response as stated.</param>
/// <param name="StopsWithout">Probability of stopping here without a response.</param>
public sealed record AnalysisRow(long Trials, double Bound, double Spent, double Stops, double StopsWithout);
