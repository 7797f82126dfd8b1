using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Results;

/// <summary>A variant of the study and its results.</summary>
/// <param name="Name">Its name.</param>
/// <param name="Assessment">Its results, as of a study of its own.</param>
public sealed record VariantResult(string Name, Assessment Assessment);

/// <summary>The result of `assess`: the study, and its variants beside it.</summary>
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

    /// <summary>The assessment as it reads for one response: protocol and session of a steady-state one.</summary>
    /// <param name="response">One of <see cref="Responses"/>.</param>
    public Assessment For(ResponseResult response) => response.Response.Steady is null ? this
        : this with { Study = Study with { Protocol = Study.ProtocolFor(response.Response) }, SessionTrials = response.SessionTrials };

    /// <summary>Variants of the study, in its order.</summary>
    public IReadOnlyList<VariantResult> Variants { get; init; } = [];

    /// <summary>How the leadfields came about.</summary>
    public LeadfieldMethod? Leadfields { get; init; }

    /// <summary>What the head's model leaves out, sentence by sentence, with the figures of this head and its sensors.</summary>
    public IReadOnlyList<string> Limits { get; init; } = [];

    /// <summary>Geometry.</summary>
    public required Scene Scene { get; init; }
}
