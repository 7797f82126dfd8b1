using System.Globalization;

using DeepSourceCheck.Core.Directions;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Spheres;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Tables;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>Sensors on a layered sphere.</summary>
internal sealed class OnSphere : SensorAssembly
{
    // Below this an electrode's move onto the sphere is rounding of its table.
    private const double MovedEnough = 1e-4;

    // Brain over skull: 15 measured in vivo (Oostendorp et al. 2000), 80 by tradition.
    private static readonly double[] SkullRatios = [15, 80];

    private readonly LayeredSphere _sphere;

    public OnSphere(Study study, SphereHeadChoice choice, InputDigests inputs, List<string> warnings)
    {
        _sphere = choice.Sphere;
        LibraryScale = choice.LibraryScale;
        Electrodes = study.Eeg is null ? [] : Place(study, inputs, warnings);
        Channels = study.Meg is null ? Generate(SplitArray) : MegChannels(study.Meg, inputs, warnings);
        if (study.Meg is null)
        {
            WarnOfSplitArray(warnings);
        }

        Source = new SphereLeadfield(_sphere, Electrodes, Channels);
        MegNames = [.. Channels.Select(c => c.Name)];
        MegKinds = [.. Channels.Select(c => c.Kind)];
        MegReported = study.Meg is not null;
        ReferenceWeights = study.Eeg is null ? [] : Core.Sensors.ReferenceWeights.Of(study.Eeg.Reference, Electrodes);
        Derivations = Weights(study, Electrodes, study.Eeg?.Layout is not null);
        Generated = study.Meg?.Generated;
    }

    /// <inheritdoc/>
    public override IHead Head => _sphere;

    /// <inheritdoc/>
    public override ILeadfieldSource Source { get; }

    /// <inheritdoc/>
    public override double LibraryScale { get; }

    /// <inheritdoc/>
    public override Vec3 LibraryCentre => _sphere.Centre;

    /// <inheritdoc/>
    public override TableSensors Tables()
    {
        Electrode[] electrodes = [.. TableSensors.Names.Select(n => new Electrode(n, _sphere.Centre + _sphere.OuterRadius * ElectrodeLayout.Direction(n), true, 0))];
        return new(new SphereLeadfield(_sphere, electrodes, Generate(TableSensors.Array)), electrodes);
    }

    /// <inheritdoc/>
    protected override IPerturbableHead Perturbable => new PerturbableSphere(_sphere, Electrodes, Channels, Generated);

    /// <inheritdoc/>
    protected override IReadOnlyList<string> Limits { get; } =
    [
        "The head is a set of concentric spheres. A real head departs from it by some 5.5 mm (standard deviation of the inner skull above the base, sphere fitted to one head in MNI space); it is worst at the low brainstem, the cerebellum and the medial temporal lobe.",
        "In spheres a radial source gives no magnetic field outside at all. Real heads leak: figures at 0.06 of the strongest direction stand beside silent directions.",
    ];

    /// <inheritdoc/>
    /// <remarks>The same spheres at both ends of the published range of skull conductivity; none where no layer is named skull.</remarks>
    protected override IReadOnlyList<ILeadfieldSource> OtherHeads() => !_sphere.Layers.Any(IsSkull) ? [] :
        [.. SkullRatios.Select(ratio => new SphereLeadfield(new LayeredSphere(_sphere.Name, _sphere.Centre, [.. _sphere.Layers.Select(l => IsSkull(l) ? WithRatio(l, ratio) : l)]), Electrodes, Channels))];

    private static bool IsSkull(SphereLayer layer) => layer.Tissue.Contains("skull", StringComparison.OrdinalIgnoreCase);

    // Its anisotropy is kept: the geometric mean of both conductivities gets the ratio.
    private SphereLayer WithRatio(SphereLayer skull, double ratio)
    {
        double factor = _sphere.Layers[0].RadialConductivity / ratio / Math.Sqrt(skull.RadialConductivity * skull.TangentialConductivity);
        return skull with { RadialConductivity = factor * skull.RadialConductivity, TangentialConductivity = factor * skull.TangentialConductivity };
    }

    /// <inheritdoc/>
    protected override Scene Scene(IReadOnlyList<FilledRegion> regions) => new()
    {
        Centre = _sphere.Centre,
        Layers = [.. _sphere.Layers.Select(l => (l.Tissue, l.OuterRadius))],
        Electrodes = [.. Electrodes.Select(e => (e.Name, e.Position))],
    };

    /// <inheritdoc/>
    protected override double? FieldCaptured(FilledRegion region) =>
        Generated is { } array && MegReported ? ArrayCoverage.OfRegion(region.Name, region.Positions, _sphere, array).Share : null;

    /// <inheritdoc/>
    protected override CentreSensitivity? CentreSensitivity(FilledRegion region, IReadOnlyList<double> deviations) =>
        MegReported && (region.Centroid - _sphere.Centre).Norm <= CentreShift.Near ? CentreShift.Of(region.Centroid, _sphere.Centre, Channels, deviations) : null;

    private Electrode[] Place(Study study, InputDigests inputs, List<string> warnings)
    {
        EegChoice choice = study.Eeg!;
        if (choice.Layout is { } layout)
        {
            return ElectrodeLayout.OnSphere(layout, _sphere, Joined(study, layout));
        }

        (string path, string display) = inputs.Use(choice.ElectrodesFile!);
        (string Path, string Display)? coordinates = inputs.UseIfNamed(choice.CoordinatesFile);
        ElectrodesTable table = ElectrodesTable.Read(path, display, coordinates?.Path, coordinates?.Display);
        warnings.AddRange(table.Warnings);
        Electrode[] placed = ElectrodePlacement.OnSphere([.. table.Electrodes.Select(e => e.Name)], [.. table.Electrodes.Select(e => e.Position)], _sphere, display);
        Electrode farthest = placed.MaxBy(e => e.MovedBy)!;
        if (farthest.MovedBy > MovedEnough)
        {
            warnings.Add(string.Create(CultureInfo.InvariantCulture,
                $"{display}: electrodes were moved along their direction onto the outer sphere, by {placed.Average(e => e.MovedBy) * 1000:0.0} mm on average and {farthest.MovedBy * 1000:0.0} mm at most ({farthest.Name})"));
        }

        return placed;
    }

    private IReadOnlyList<MegChannel> MegChannels(MegChoice choice, InputDigests inputs, List<string> warnings)
    {
        if (choice.Generated is { } generated)
        {
            return Generate(generated);
        }

        (string path, string display) = inputs.Use(choice.CoilsFile!);
        CoilsTable table = CoilsTable.Read(path, display);
        warnings.AddRange(table.Warnings);
        SphereLeadfield.CheckCoils(_sphere, table.Channels, display);
        return table.Channels;
    }

    private MegChannel[] Generate(CoilArrayChoice choice) => CoilArray.Generate(choice, _sphere.Centre, _sphere.OuterRadius);
}
