namespace DeepSourceCheck.Core.Heads.Voxels.Phantom;

/// <summary>Tissues of the phantom with conductivities [S/m].</summary>
/// <remarks>
/// Adult: the six-tissue set in common use (0.43, 0.008, 0.025, 1.79, 0.33, 0.14; CSF: Baumann 1997, from memory; the rest common practice, no source). Neonate: those of the neonate
/// sphere; the fontanelle is a membrane that conducts as brain does (common practice, no source), ten times as well as the bone; white matter is not myelinated yet and conducts as grey does.
/// </remarks>
public static class PhantomTissues
{
    private static readonly Tissue Air = new(PhantomHead.Air, "air", TissueKind.Air, 0);

    private static readonly Tissue[] Adult =
    [
        Air,
        new(PhantomHead.Scalp, "scalp", TissueKind.Scalp, 0.43),
        new(PhantomHead.CompactBone, "compact skull", TissueKind.Skull, 0.008),
        new(PhantomHead.SpongyBone, "spongy skull", TissueKind.Skull, 0.025),
        new(PhantomHead.Csf, "csf", TissueKind.Csf, 1.79),
        new(PhantomHead.Grey, "grey", TissueKind.Grey, 0.33),
        new(PhantomHead.White, "white", TissueKind.White, 0.14),
    ];

    private static readonly Tissue[] Neonate =
    [
        Air,
        new(PhantomHead.Scalp, "scalp", TissueKind.Scalp, 0.43),
        new(PhantomHead.CompactBone, "skull", TissueKind.Skull, 0.033),
        new(PhantomHead.Csf, "csf", TissueKind.Csf, 1.79),
        new(PhantomHead.Grey, "grey", TissueKind.Grey, 0.33),
        new(PhantomHead.White, "white", TissueKind.White, 0.33),
        new(PhantomHead.Fontanelle, "fontanelle", TissueKind.Skull, 0.33),
    ];

    /// <summary>Tissues of a kind of head, air first.</summary>
    public static IReadOnlyList<Tissue> Of(PhantomKind kind) => kind == PhantomKind.Neonate ? Neonate : Adult;
}
