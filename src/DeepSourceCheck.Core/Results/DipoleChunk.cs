using DeepSourceCheck.Core.Directions;
using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Results;

/// <summary>Results of a run of consecutive dipoles of one region: the unit in which dipole results stream out.</summary>
/// <remarks>Used again for the next chunk of its thread: arrays may be longer than the count asks for.</remarks>
public sealed class DipoleChunk
{
    /// <summary>Response.</summary>
    public required string Response { get; init; }

    /// <summary>Region.</summary>
    public required string Region { get; set; }

    /// <summary>Number of dipoles.</summary>
    public required int Count { get; set; }

    /// <summary>Name of each point: the study's, or its row in the region from 0.</summary>
    public required string[] Points { get; init; }

    /// <summary>Positions [m].</summary>
    public required Vec3[] Positions { get; init; }

    /// <summary>Unit vectors v1, v2, v3 of each dipole; NaN where undefined.</summary>
    public required Vec3[] Directions { get; init; }

    /// <summary>s1, s2, s3 of each dipole [1/(A m)]; NaN where there is no MEG leadfield.</summary>
    public required Vec3[] SingularValues { get; init; }

    /// <summary>State of the split.</summary>
    public required SplitState[] States { get; init; }

    /// <summary>SNR of one trial [dB], [column][dipole]; negative infinity where silent, NaN where undefined.</summary>
    public required double[][] SnrDb { get; init; }
}
