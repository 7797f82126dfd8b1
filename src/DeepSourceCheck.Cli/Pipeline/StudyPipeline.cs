using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>What a study is prepared for: a leadfield needs no responses, noise, target or protocol.</summary>
internal enum Purpose
{
    /// <summary>The whole assessment.</summary>
    Assess,

    /// <summary>Leadfields alone.</summary>
    Leadfield,
}

/// <summary>How a run goes, apart from what is computed.</summary>
/// <param name="MemoryBudget">Memory [bytes] against which the run is refused; null: none was stated.</param>
/// <param name="Without">Parts of the result that are left out: dipoles, figures, report, maps.</param>
/// <param name="Progress">Told the stage and the fraction of it that is done, 0 to 1; from any thread. Null: nobody watches.</param>
/// <param name="Cancellation">Ends the run.</param>
internal sealed record RunSettings(long? MemoryBudget, IReadOnlySet<string> Without, Action<string, double>? Progress, CancellationToken Cancellation);

/// <summary>A study that was read and found sound.</summary>
internal sealed class PreparedStudy
{
    /// <summary>The study.</summary>
    public required Study Study { get; init; }

    /// <summary>Warnings, gravest first.</summary>
    public IReadOnlyList<string> Warnings { get; init; } = [];

    /// <summary>Every value that would enter.</summary>
    public IReadOnlyList<Assumption> Assumptions { get; init; } = [];

    /// <summary>Electrodes in use.</summary>
    public int Electrodes { get; init; }

    /// <summary>MEG channels in use.</summary>
    public int MegChannels { get; init; }

    /// <summary>Dipoles in all regions.</summary>
    public long Dipoles { get; init; }

    /// <summary>Regions with their dipoles and spacing [mm]; null for points.</summary>
    public IReadOnlyList<(string Region, long Dipoles, double? SpacingMm)> Regions { get; init; } = [];

    /// <summary>Predicted peak memory [bytes].</summary>
    public long PredictedMemory { get; init; }

    /// <summary>Predicted time [s].</summary>
    public double PredictedSeconds { get; init; }
}

/// <summary>The flow from a study file to its results.</summary>
internal static class StudyPipeline
{
    /// <summary>Reads and validates everything that the purpose needs.</summary>
    /// <exception cref="InputException">The input is wrong.</exception>
    public static PreparedStudy Prepare(string? studyPath, Purpose purpose, RunSettings settings) =>
        throw new InvalidOperationException("the pipeline is not part of this branch");

    /// <summary>Computes the assessment; dipole results stream into the sink.</summary>
    public static Assessment Assess(PreparedStudy prepared, RunSettings settings, IDipoleSink? dipoles) =>
        throw new InvalidOperationException("the pipeline is not part of this branch");

    /// <summary>Writes the leadfields of every region into a folder that exists.</summary>
    public static void WriteLeadfield(PreparedStudy prepared, string folder, RunSettings settings) =>
        throw new InvalidOperationException("the pipeline is not part of this branch");
}
