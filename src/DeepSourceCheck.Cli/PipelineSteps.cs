using DeepSourceCheck.Cli.Pipeline;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Files.Studies;

namespace DeepSourceCheck.Cli;

/// <summary>The steps that the commands call. A seam for tests of failures and interruptions; the program always runs <see cref="Real"/>.</summary>
/// <param name="Prepare">Reads and validates a study (null: the embedded default).</param>
/// <param name="Assess">Computes the assessment.</param>
/// <param name="WriteLeadfield">Writes leadfields into an existing folder.</param>
internal sealed record PipelineSteps(
    Func<string?, Purpose, RunSettings, PreparedStudy> Prepare,
    Func<PreparedStudy, RunSettings, IDipoleSink?, Assessment> Assess,
    Action<PreparedStudy, string, RunSettings> WriteLeadfield)
{
    /// <summary>The program's own steps.</summary>
    public static readonly PipelineSteps Real = new(StudyPipeline.Prepare, StudyPipeline.Assess, StudyPipeline.WriteLeadfield);
}
