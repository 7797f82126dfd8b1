using System.Globalization;

using DeepSourceCheck.Core.Planning;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Files.Studies;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>A stated moment against what a region of that size can hold.</summary>
/// <remarks>
/// The largest moment density of any laminar structure is 1 to 2 nAm/mm2 (Murakami and Okada 2015, NeuroImage 111:49, from memory). The area is the cross-section through the middle of a
/// sphere of the region's volume, pi (3 V / 4 pi)^(2/3): a nucleus has no sheet whose area could be measured. Points and surfaces have no volume and are not judged.
/// </remarks>
internal static class MomentCheck
{
    /// <summary>Largest moment density [A m/m^2]: 2 nAm/mm2.</summary>
    public const double LargestDensity = 2e-3;

    /// <summary>Cross-section of a sphere of a volume [m^2].</summary>
    /// <param name="volume">Volume [m^3].</param>
    public static double CrossSection(double volume) => Math.PI * Math.Pow(3 * volume / (4 * Math.PI), 2.0 / 3.0);

    /// <summary>Judges every response in every region that it names; regions that act together share the moment.</summary>
    /// <returns>Warnings.</returns>
    /// <exception cref="InputException">A moment more than ten times what a region can hold, not accepted by the study.</exception>
    public static IReadOnlyList<string> Judge(StudyReading reading, StudySetup setup)
    {
        var warnings = new List<string>();
        foreach (Response response in reading.Study.Responses.Where(r => r.Amplitude is null))
        {
            warnings.AddRange(Judge(reading, setup, response, Key(response), _ => response.Moment));
        }

        return warnings;
    }

    /// <summary>Judges the moments that were found from an amplitude: against moments that were ever published, then as stated ones.</summary>
    /// <returns>Warnings.</returns>
    /// <exception cref="InputException">A moment that cannot be, not accepted by the study.</exception>
    public static IReadOnlyList<string> JudgeFound(StudyReading reading, StudySetup setup, IReadOnlyList<ResponseResult> responses)
    {
        var warnings = new List<string>();
        TypicalRange usual = StudyKeys.Find("responses[].moment_nAm")!.Typical!;
        foreach (ResponseResult result in responses.Where(r => r.Response.Amplitude is not null))
        {
            string key = Key(result.Response);
            foreach (RegionResult region in result.Regions)
            {
                PlausibilityJudgement judgement = Plausibility.Judge(key, Round(Si.ToNanoAmpereMetres(region.Moment)), usual.Low, usual.High, "nAm", reading.Study.AcceptImplausible,
                    $"the moment of {region.Region} that follows from amplitude.peak_uV at {result.Response.Amplitude!.Derivation},");
                Take(reading, Amplitude(result.Response), judgement, warnings);
            }

            warnings.AddRange(Judge(reading, setup, result.Response, key, name => (result.Regions.FirstOrDefault(r => r.Region == name) ?? result.Regions[0]).Moment));
        }

        return [.. warnings.Distinct()];
    }

    // What accept_implausible names, stated or found.
    private static string Key(Response response) => response.Key + ".moment_nAm";

    // Where a found moment stands in the study: the key that it follows from.
    private static string Amplitude(Response response) => response.Key + ".amplitude.peak_uV";

    private static List<string> Judge(StudyReading reading, StudySetup setup, Response response, string key, Func<string, double> momentOf)
    {
        var warnings = new List<string>();
        double[] shares = Activation.Shares(response);
        for (int k = 0; k < response.Regions.Count; k++)
        {
            FilledRegion region = setup.Region(response.Regions[k]);
            if (!region.IsSurface && (region.ShapeVolume ?? region.Volume) is { } volume)
            {
                double moment = Si.ToNanoAmpereMetres(momentOf(region.Name) * (response.Together ? Math.Abs(shares[k]) : 1));

                double area = CrossSection(volume);
                string what = string.Create(CultureInfo.InvariantCulture,
                    $"against 2 nAm/mm2 over the {area * 1e6:0.#} mm2 of {region.Name} (cross-section of a sphere of its volume), the moment {(response.Amplitude is null ? "" : "that follows from amplitude.peak_uV ")}of");
                Take(reading, response.Amplitude is null ? key : Amplitude(response),
                    Plausibility.Judge(key, response.Amplitude is null ? moment : Round(moment), 0, Round(Si.ToNanoAmpereMetres(LargestDensity * area)), "nAm", reading.Study.AcceptImplausible, what), warnings);
            }
        }

        return warnings;
    }

    private static void Take(StudyReading reading, string key, PlausibilityJudgement judgement, List<string> warnings)
    {
        switch (judgement.Is)
        {
            case Plausible.Problem:
                throw new InputException([reading.Problem(key, judgement.Text)]);
            case Plausible.Warning:
                warnings.Add($"{key}: {judgement.Text}");
                break;
        }
    }

    // Three digits: the limit is no better known.
    private static double Round(double value) => double.Parse(value.ToString("G3", CultureInfo.InvariantCulture), CultureInfo.InvariantCulture);
}
