using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Planning;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>Noise of a study, to be joined with its other parts.</summary>
/// <param name="Model">The noise as the study reads it.</param>
/// <param name="Removed">The room's terms that are taken out of it and out of the leadfields; null where none are.</param>
internal sealed record BuiltNoise(NoiseModel Model, EnvironmentNoise? Removed)
{
    /// <summary>The parts with their noise; where the room's terms are removed, with leadfields after their removal.</summary>
    /// <param name="setup">The study's parts, without noise.</param>
    public StudySetup Into(StudySetup setup) => Model.MegOperator is not { } removal ? setup with { Noise = Model } : setup with
    {
        Noise = Model,
        Source = new ProjectedSource(setup.Source, removal),
        OtherHeads = [.. setup.OtherHeads.Select(h => new ProjectedSource(h, removal))],
        Perturbable = setup.Perturbable is { } head ? new ProjectedHead(head, removal) : null,
        Removal = new(setup.Source, Model.Unprojected(null), Model.Unprojected(Removed)),
    };
}
