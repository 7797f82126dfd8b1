namespace DeepSourceCheck.Core.Directions;

/// <summary>State of the split of directions at one dipole.</summary>
public enum SplitState
{
    /// <summary>`ok`.</summary>
    Ok,

    /// <summary>`degenerate`: a gap between neighbouring singular values below 1e-8 of the largest.</summary>
    Degenerate,

    /// <summary>`undefined`: at the head's symmetry centre, or no MEG leadfield.</summary>
    Undefined,
}
