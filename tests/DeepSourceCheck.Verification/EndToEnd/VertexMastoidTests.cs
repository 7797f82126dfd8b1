using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Verification.EndToEnd;

/// <summary>
/// Potential of a vertical dipole of 1 nAm, Cz minus the mean of the mastoids, in spheres of 78/80/86/92 mm and 0.33/1.79/0.008/0.43 S/m about (0, -18, 4) mm.
/// Values derived apart from this program (closed series, checked against direct solutions), given to two digits.
/// </summary>
public class VertexMastoidTests
{
    /// <summary>
    /// Where the reference's mastoids lie is not on record. With ours (95 degrees from front, 26 below) the deep places agree to their digits; the cerebellum, whose nearest electrode is a
    /// mastoid, comes out 3.4 % lower. Ten degrees of azimuth more bring all six to their digits: the place of the mastoids is the whole difference.
    /// </summary>
    private const double OurMastoids = 0.035;

    /// <summary>Half a unit of the second digit of uV, and what rounding of the other parameters adds.</summary>
    private const double TwoDigits = 0.0006;

    private static readonly (string Name, Vec3 Mm, double Microvolts)[] Places =
    [
        ("inferior-colliculus", new(6, -34, -11), 0.066),
        ("medial-geniculate", new(15, -25, -6), 0.070),
        ("ventral-posterolateral-thalamus", new(17, -20, 6), 0.079),
        ("hippocampus", new(27, -22, -14), 0.066),
        ("cerebellum", new(25, -62, -36), 0.049),
        ("cochlear-nucleus", new(10, -39, -45), 0.044),
    ];

    [Fact]
    public void VerticalDipoles_AtTheContractsMastoids_GiveTheReferenceWithinTheirPlacement()
    {
        double[] found = Potentials("{layout: ten-twenty-21, reference: none}", []);
        for (int k = 0; k < Places.Length; k++)
        {
            Assert.True(Math.Abs(found[k] - Places[k].Microvolts) <= OurMastoids * Places[k].Microvolts, $"{Places[k].Name}: {found[k]:F4} uV/nAm");
        }
    }

    [Fact]
    public void VerticalDipoles_AtMastoidsFartherBack_GiveEveryReferenceToItsDigits()
    {
        // The same electrodes as a table, mastoids at 104 degrees from front, 26 below: no other change.
        static string Row(string name, double azimuth, double elevation)
        {
            (double a, double e) = (azimuth * Math.PI / 180, elevation * Math.PI / 180);
            return FormattableString.Invariant($"{name}\t{92 * Math.Cos(e) * Math.Sin(a):R}\t{92 * Math.Cos(e) * Math.Cos(a) - 18:R}\t{92 * Math.Sin(e) + 4:R}\n");
        }

        string table = "name\tx\ty\tz\n" + Row("Cz", 0, 85.5) + Row("M1", -104, -26) + Row("M2", 104, -26);
        double[] found = Potentials("{electrodes: electrodes.tsv, reference: none}", [("electrodes.tsv", table)]);
        for (int k = 0; k < Places.Length; k++)
        {
            Assert.True(Math.Abs(found[k] - Places[k].Microvolts) <= TwoDigits, $"{Places[k].Name}: {found[k]:F4} uV/nAm");
        }
    }

    private static double[] Potentials(string eeg, (string Name, string Text)[] files)
    {
        string study = $$"""
            head:
              spheres:
                centre_mm: [0, -18, 4]
                layers:
                  - {tissue: brain, radius_mm: 78, conductivity_S_per_m: 0.33}
                  - {tissue: csf, radius_mm: 80, conductivity_S_per_m: 1.79}
                  - {tissue: skull, radius_mm: 86, conductivity_S_per_m: 0.008}
                  - {tissue: scalp, radius_mm: 92, conductivity_S_per_m: 0.43}
            sensors: {eeg: {{eeg}}, eeg_derivations: [Cz-mastoids]}
            noise: {eeg_sensor_uV_rms: 2}
            regions: [{{string.Join(", ", Places.Select(p => $"{{name: at-{p.Name}, points: {p.Name}.tsv}}"))}}]
            responses: [{name: r, regions: [{{string.Join(", ", Places.Select(p => "at-" + p.Name))}}], moment_nAm: 1, band_Hz: [100, 1500], direction: [0, 0, 1]}]
            """;
        WholeChain run = WholeChain.Run(study, [.. files, .. Places.Select(p => WholeChain.Points(p.Name + ".tsv", ("p", p.Mm)))]);
        return [.. Places.Select((_, k) => run.Peak(Modality.Eeg, DirectionName.Given, "Cz-mastoids", 0, k))];
    }
}
