using System.Globalization;

using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Studies;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>Predicted peaks against what has ever been recorded: mostly a moment in the wrong unit.</summary>
internal static class AmplitudeCheck
{
    // uV: 0.01 to 150, fT: 1 to 10,000 (contract); fT/cm over a baseline of centimetres alike.
    private static readonly (double Low, double High) Microvolts = (0.01, 150), Femtotesla = (1, 10_000);

    /// <summary>Judges the peaks that the verdicts stand on.</summary>
    /// <returns>Warnings. A peak that is too small only warns: a silent or deep source is what the tool is for.</returns>
    /// <exception cref="InputException">A peak more than ten times above what is usual, not accepted by the study.</exception>
    public static IReadOnlyList<string> Judge(StudyReading reading, IReadOnlyList<ResponseResult> responses)
    {
        var warnings = new List<string>();
        foreach (ResponseResult response in responses)
        {
            string key = response.Response.Key + ".moment_nAm", place = response.Response.Amplitude is null ? key : response.Response.Key + ".amplitude.peak_uV";
            foreach (RegionResult region in response.Regions)
            {
                foreach (VerdictResult verdict in region.Verdicts.DistinctBy(v => (v.Modality, v.Measure)))
                {
                    if (region.Find(verdict.Modality, verdict.Direction, verdict.Measure)?.Peak is not { Value: > 0 } peak)
                    {
                        continue;
                    }

                    (double low, double high) = peak.Unit == "uV" ? Microvolts : Femtotesla;
                    string what = $"the predicted peak at {peak.Channel} ({region.Region}) of";
                    PlausibilityJudgement judgement = Plausibility.Judge(key, peak.Value, low, high, peak.Unit, reading.Study.AcceptImplausible, what);
                    if (judgement.Is == Plausible.Problem && peak.Value > high)
                    {
                        throw new InputException([reading.Problem(place, judgement.Text)]);
                    }

                    if (judgement.Is != Plausible.Yes)
                    {
                        warnings.Add(peak.Value > high ? $"{place}: {judgement.Text}" : string.Create(CultureInfo.InvariantCulture,
                            $"{response.Response.Name}: {what} {peak.Value:G2} {peak.Unit} is far below anything published ({low} to {high:N0} {peak.Unit})"));
                    }
                }
            }
        }

        return warnings;
    }
}
