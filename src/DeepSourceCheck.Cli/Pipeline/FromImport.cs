using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Imported;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Leadfields;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>Sensors of imported leadfields: names and kinds, without a head.</summary>
internal sealed class FromImport : SensorAssembly
{
    private readonly ImportedLeadfield _leadfield;

    public FromImport(Study study, ImportedHeadChoice choice, InputDigests inputs, List<string> warnings)
    {
        (_leadfield, IReadOnlyList<string> found) =
            ImportedLeadfieldReader.Read(inputs.UseIfNamed(choice.Eeg), inputs.UseIfNamed(choice.Meg), inputs.Use(choice.Points), inputs.Use(choice.Rows));
        warnings.AddRange(found);
        Electrodes = [.. _leadfield.EegChannels.Select(c => new Electrode(c.Name, c.Position ?? Vec3.Zero, true, 0))];
        ReferenceChoice reference = study.Eeg?.Reference ?? new ReferenceChoice(ReferenceKind.Average, []);
        if (_leadfield.MegChannels.Count == 0)
        {
            warnings.Add("the imported leadfields hold no MEG: directions cannot be split, so that only isotropic, best and given figures are reported");
        }

        MegNames = [.. _leadfield.MegChannels.Select(c => c.Name)];
        MegKinds = [.. _leadfield.MegChannels.Select(c => c.Kind ?? CoilKind.Magnetometer)];
        MegReported = _leadfield.MegChannels.Count > 0;
        ReferenceWeights = Electrodes.Count == 0 ? [] : Core.Sensors.ReferenceWeights.Of(reference, Electrodes);
        Derivations = Weights(study, Electrodes, false);
    }

    /// <inheritdoc/>
    public override IHead Head { get; } = new ImportedHead();

    /// <inheritdoc/>
    public override ILeadfieldSource Source => _leadfield;

    /// <inheritdoc/>
    public override ImportedLeadfield Imported => _leadfield;

    /// <inheritdoc/>
    public override TableSensors? Tables() => null;

    /// <inheritdoc/>
    protected override IReadOnlyList<string> Limits { get; } = ["The leadfields were imported: nothing is known here of the head, its tissues or their errors."];

    /// <inheritdoc/>
    protected override Scene Scene(IReadOnlyList<FilledRegion> regions) => new();
}
