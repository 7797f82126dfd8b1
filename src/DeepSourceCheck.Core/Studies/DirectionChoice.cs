using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Studies;

/// <summary>The direction whose figures carry the verdict.</summary>
/// <param name="Name">Which.</param>
/// <param name="Vector">Unit vector for <see cref="DirectionName.Given"/>, else null.</param>
public sealed record DirectionChoice(DirectionName Name, Vec3? Vector);

/// <summary>Names of the reported directions, as the results write them.</summary>
public enum DirectionName
{
    /// <summary>`quasi-radial`: v3, the direction that the MEG array sees least.</summary>
    QuasiRadial,

    /// <summary>`tangential`: 64 equally spaced angles from v1 in the plane of v1 and v2.</summary>
    Tangential,

    /// <summary>`strongest-tangential`: v1.</summary>
    StrongestTangential,

    /// <summary>`isotropic`: 256 points of the golden-angle spiral.</summary>
    Isotropic,

    /// <summary>`best`: the largest over all directions, for each measure and modality.</summary>
    Best,

    /// <summary>`given`: the vector that the study states.</summary>
    Given,
}
