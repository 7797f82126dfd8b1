using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Results;

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

/// <summary>A column of SNR in dipoles.csv.</summary>
/// <param name="Modality">EEG, MEG or both.</param>
/// <param name="Direction">`quasi-radial` and so on, as results write it.</param>
/// <param name="Measure">Measure's name.</param>
public sealed record DipoleColumn(Modality Modality, string Direction, string Measure)
{
    /// <summary>`modality|direction|measure`.</summary>
    public string Name => $"{Names.Of(Modality)}|{Direction}|{Measure}";
}

/// <summary>Results of a run of consecutive dipoles of one region: the unit in which dipole results stream out.</summary>
public sealed class DipoleChunk
{
    /// <summary>Response.</summary>
    public required string Response { get; init; }

    /// <summary>Region.</summary>
    public required string Region { get; init; }

    /// <summary>Number of dipoles.</summary>
    public required int Count { get; init; }

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

/// <summary>Takes dipole results as they are computed.</summary>
public interface IDipoleSink
{
    /// <summary>Called once, before anything else, with the columns of every chunk.</summary>
    void Begin(IReadOnlyList<DipoleColumn> columns);

    /// <summary>Turns a chunk into bytes. Pure; may run on several threads at once.</summary>
    byte[] Format(DipoleChunk chunk);

    /// <summary>Appends formatted chunks; called in the order of the dipoles, from one thread at a time.</summary>
    void Append(byte[] formatted);
}
