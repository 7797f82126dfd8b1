namespace DeepSourceCheck.Core.Heads.Voxels.Phantom;

/// <summary>Whose head the phantom is.</summary>
public enum PhantomKind
{
    /// <summary>An adult in MNI-like millimetres.</summary>
    Adult,

    /// <summary>The adult scaled to a newborn, with a thin skull of one layer.</summary>
    Neonate,
}

/// <summary>What differs between the kinds of head.</summary>
internal static class PhantomKinds
{
    /// <summary>Size against the adult, without unit. Neonate: inner radii 49 and 78 mm of the spherical presets, so that library regions scale alike.</summary>
    public static double Scale(this PhantomKind kind) => kind == PhantomKind.Neonate ? 49.0 / 78.0 : 1;

    /// <summary>Whether the skull has a spongy layer. A newborn's has none: its bones are single plates (common anatomical knowledge).</summary>
    public static bool HasSpongyBone(this PhantomKind kind) => kind == PhantomKind.Adult;
}
