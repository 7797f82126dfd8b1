using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Results;

/// <summary>The result of `assess`: one variant of the study.</summary>
public sealed record Assessment
{
    /// <summary>Study.</summary>
    public required Study Study { get; init; }

    /// <summary>Program version.</summary>
    public required string Version { get; init; }

    /// <summary>Files that were read, with digests.</summary>
    public IReadOnlyList<InputFile> Inputs { get; init; } = [];

    /// <summary>Every value that entered.</summary>
    public IReadOnlyList<Assumption> Assumptions { get; init; } = [];

    /// <summary>Warnings, gravest first.</summary>
    public IReadOnlyList<string> Warnings { get; init; } = [];

    /// <summary>Results.</summary>
    public required IReadOnlyList<ResponseResult> Responses { get; init; }

    /// <summary>Accepted trials that the session affords, or null.</summary>
    public long? SessionTrials { get; init; }

    /// <summary>Geometry.</summary>
    public required Scene Scene { get; init; }
}
