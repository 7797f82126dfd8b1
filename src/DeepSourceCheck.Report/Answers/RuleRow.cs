using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Report.Answers;

/// <summary>The answer of one region by one of the study's rules.</summary>
/// <param name="Target">The rule.</param>
/// <param name="Answer">The answer by it.</param>
public sealed record RuleRow(TargetChoice Target, RegionAnswer Answer)
{
    /// <summary>Rules differ in what they promise: `readable`, `detected`, `quiet`.</summary>
    public string Promise => Target switch
    {
        AmplitudeRatioChoice => "readable",
        ResidualNoiseChoice => "quiet average",
        _ => "detected",
    };

    /// <summary>`amplitude ratio: readable`.</summary>
    public string Label => $"{Say.RuleKey(Answer.Rule)}: {Promise}";

    /// <summary>Every rule of the study, in its order.</summary>
    public static IReadOnlyList<RuleRow> Of(Assessment assessment, Response response, RegionResult region) =>
        [.. assessment.Study.Targets.Select(t => new RuleRow(t, new RegionAnswer(assessment, response, region, Names.Of(t)))).Where(r => r.Answer.Answers.Count > 0)];
}
