using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Report.Answers;

/// <summary>One measured change of SNR [dB], from spheres to the invented head and to a real one.</summary>
/// <param name="Modality">EEG or MEG.</param>
/// <param name="Measure">Derivation, or <see cref="Names.BestChannel"/>.</param>
/// <param name="Phantom">On the invented head [dB].</param>
/// <param name="RealHead">On the real one [dB].</param>
public sealed record RealisticHeadChange(Modality Modality, string Measure, double Phantom, double RealHead);

/// <summary>What a realistic head changes at a library region, in words that console and page share.</summary>
public static class RealisticHead
{
    /// <summary>The preset of spheres that the changes count from.</summary>
    public const string Spheres = "adult-4";

    /// <summary>How far the right side of the invented head departs from the left one, whose figures it gets [dB]: measured over all sided regions, rounded up.</summary>
    public const double SidesDiffer = 1.3;

    /// <summary>What the figures are.</summary>
    public const string Meaning =
        "Change of the SNR of one trial from the spheres of " + Spheres + ", median over places and all directions (isotropic), and the number of trials that follows";

    /// <summary>The changes in the order in which they are shown.</summary>
    public static IReadOnlyList<RealisticHeadChange> Changes(RealisticHeadEffect effect) =>
    [
        new(Modality.Eeg, "Cz-mastoids", effect.Phantom.EegCzMastoids, effect.RealHead.EegCzMastoids),
        new(Modality.Eeg, Names.BestChannel, effect.Phantom.EegBestChannel, effect.RealHead.EegBestChannel),
        new(Modality.Meg, Names.BestChannel, effect.Phantom.MegBestChannel, effect.RealHead.MegBestChannel),
    ];

    /// <summary>`EEG Cz-mastoids`, `MEG best channel`.</summary>
    public static string Words(RealisticHeadChange change) => $"{Names.Of(change.Modality)} {(change.Measure == Names.BestChannel ? "best channel" : change.Measure)}";

    /// <summary>`+1.9 dB, 0.65 × the trials`.</summary>
    /// <param name="db">Change of SNR [dB].</param>
    public static string Change(double db) => $"{Say.SignedDecibels(db)} dB, {Say.Two(HeadChange.TrialsFactor(db))} × the trials";

    /// <summary>What MEG sees of its least visible direction.</summary>
    public static string Directions(RealisticHeadEffect effect) =>
        $"The direction that MEG sees least, silent and straight outward in spheres, has {Say.Two(effect.WeakestOverStrongest)} of the strongest on the invented head and stands {Say.Stated(effect.WeakestToOutwardDeg)} degrees from the outward one.";

    /// <summary>Where the figures were measured, and what they are not.</summary>
    public static string Caution(Assessment assessment, IEnumerable<RealisticHeadEffect> effects) =>
        "Measured on the program's invented adult head (voxels of 2\u00A0mm) and on one labelled real head, not with this study's head, sensors or noise; a single direction can change by more. Where the two heads disagree, only the person's own tells."
        + (effects.Any(e => e.MeasuredSide is not null) ? $" A right side is given the figures of the left: on the invented head the two differ by {Say.Stated(SidesDiffer)}\u00A0dB at most." : "")
        + (assessment.Study.Head is SphereHeadChoice { LibraryScale: not 1 } ? " This study's head is smaller: there are no figures of its size." : "");

    /// <summary>How to get figures of one's own: a sentence, then what to write, a line each. Empty where the study and its variants compare both kinds of head already.</summary>
    public static IReadOnlyList<string> Own(Assessment assessment)
    {
        HeadChoice[] heads = [assessment.Study.Head, .. assessment.Variants.Select(v => v.Assessment.Study.Head)];
        SphereHeadChoice? spheres = heads.OfType<SphereHeadChoice>().FirstOrDefault();
        bool voxels = heads.Any(h => h is VoxelHeadChoice);
        string preset = spheres?.Preset ?? Spheres;
        string variant = $"variants: [{{name: spheres, head: {{spheres: {{preset: {preset}}}}}}}]";
        return (spheres, voxels) switch
        {
            ({ }, false) =>
            [
                "For figures of your own: the command below writes an invented head with a study to change (head.voxels takes a person's labelled volume likewise), and the line below, in that study, puts the spheres beside it.",
                $"deepsourcecheck new FOLDER --head {(preset == "neonate" ? "neonate-phantom" : "phantom")}", variant,
            ],
            (null, true) => ["For figures of your own: this line in the study puts the spheres beside its head.", variant],
            _ => [],
        };
    }

    /// <summary>What to say of a region without figures on spheres; null on other heads.</summary>
    public static string? None(Assessment assessment, RegionResult region) => assessment.Study.Head is SphereHeadChoice
        ? $"Nothing was measured for {region.Region}: there are figures for the deep regions of the library alone."
        : null;
}
