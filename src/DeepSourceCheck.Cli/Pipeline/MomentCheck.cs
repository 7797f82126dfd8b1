using System.Globalization;

using DeepSourceCheck.Core.Planning;
using DeepSourceCheck.Core.Regions;
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
        foreach (Response response in reading.Study.Responses)
        {
            string key = response.Key + ".moment_nAm";
            double moment = Si.ToNanoAmpereMetres(response.Together ? response.Moment / response.Regions.Count : response.Moment);
            foreach (FilledRegion region in response.Regions.Select(setup.Region).Where(r => !r.IsSurface))
            {
                if ((region.ShapeVolume ?? region.Volume) is not { } volume)
                {
                    continue;
                }

                double area = CrossSection(volume);
                string what = string.Create(CultureInfo.InvariantCulture,
                    $"against 2 nAm/mm2 over the {area * 1e6:0.#} mm2 of {region.Name} (cross-section of a sphere of its volume), the moment of");
                PlausibilityJudgement judgement =
                    Plausibility.Judge(key, moment, 0, Round(Si.ToNanoAmpereMetres(LargestDensity * area)), "nAm", reading.Study.AcceptImplausible, what);
                if (judgement.Is == Plausible.Problem)
                {
                    throw new InputException([reading.Problem(key, judgement.Text)]);
                }

                if (judgement.Is == Plausible.Warning)
                {
                    warnings.Add($"{key}: {judgement.Text}");
                }
            }
        }

        return warnings;
    }

    // Three digits: the limit is no better known.
    private static double Round(double value) => double.Parse(value.ToString("G3", CultureInfo.InvariantCulture), CultureInfo.InvariantCulture);
}
