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
    public const double SidesDiffer = 1.2;

    /// <summary>How the figures came about.</summary>
    public const string Conditions =
        "Measured against the spheres of " + Spheres + " with sources in all directions (isotropic), medians: on the invented adult head of the program (voxels of 2 mm), and on one labelled real head.";

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
        $"MEG sees its least visible direction at {Say.Two(effect.WeakestOverStrongest)} of its strongest (in spheres not at all), and that direction stands {Say.Stated(effect.WeakestToOutwardDeg)} degrees from the outward one (in spheres 0); both on the invented head.";

    /// <summary>What the figures are not.</summary>
    public static string Caution(IEnumerable<RealisticHeadEffect> effects) =>
        "They are no figures of this study's head, sensors or noise: where the two heads disagree, no more is known without the person's own."
        + (effects.Any(e => e.MeasuredSide is not null) ? $" Right sides carry the figures of the left, from which they differ by {Say.Stated(SidesDiffer)} dB at most on the invented head." : "");

    /// <summary>How to get figures of one's own; null where the study and its variants compare both kinds of head already.</summary>
    public static string? Own(Assessment assessment)
    {
        HeadChoice[] heads = [assessment.Study.Head, .. assessment.Variants.Select(v => v.Assessment.Study.Head)];
        bool spheres = heads.Any(h => h is SphereHeadChoice), voxels = heads.Any(h => h is VoxelHeadChoice);
        const string Variant = "`variants: [{name: spheres, head: {spheres: {preset: adult-4}}}]`";
        return (spheres, voxels) switch
        {
            (true, false) => $"For figures of your own: `deepsourcecheck new FOLDER --head phantom` writes that invented head with a study to change, `head.voxels` takes a labelled volume of a person's head, and {Variant} in such a study shows both side by side.",
            (false, true) => $"For figures of your own: {Variant} in this study shows both side by side.",
            _ => null,
        };
    }

    /// <summary>What to say of a region without figures on spheres; null on other heads.</summary>
    public static string? None(Assessment assessment, RegionResult region) => assessment.Study.Head is SphereHeadChoice
        ? $"Nothing was measured for {region.Region}: there are figures for the deep regions of the library alone."
        : null;
}
