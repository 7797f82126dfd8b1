using DeepSourceCheck.Core.Directions;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Imported;
using DeepSourceCheck.Core.Leadfields.Spheres;
using DeepSourceCheck.Core.Planning;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Leadfields;
using DeepSourceCheck.Files.Studies;
using DeepSourceCheck.Files.Tables;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>Head, electrodes, coils and leadfields of a study.</summary>
internal sealed class SensorAssembly
{
    // Sites of the array that serves the split alone where a study has no MEG: magnetometers all around, near enough to see every tangential direction.
    private const int SplitSites = 300;
    private const double SplitGap = 0.020;

    /// <summary>Head.</summary>
    public required IHead Head { get; init; }

    /// <summary>The same as a sphere, or null.</summary>
    public LayeredSphere? Sphere => Head as LayeredSphere;

    /// <summary>The same as imported leadfields, or null.</summary>
    public ImportedLeadfield? Imported => Source as ImportedLeadfield;

    /// <summary>Leadfields, unreferenced.</summary>
    public required ILeadfieldSource Source { get; init; }

    /// <summary>Electrodes; for imported leadfields without places.</summary>
    public IReadOnlyList<Electrode> Electrodes { get; init; } = [];

    /// <summary>MEG channels of a sphere, the split's own where the study has none.</summary>
    public IReadOnlyList<MegChannel> Channels { get; init; } = [];

    /// <summary>Names of the MEG rows.</summary>
    public required IReadOnlyList<string> MegNames { get; init; }

    /// <summary>Kinds of the MEG rows.</summary>
    public required IReadOnlyList<CoilKind> MegKinds { get; init; }

    /// <summary>False where the MEG rows serve the split alone.</summary>
    public bool MegReported { get; init; }

    /// <summary>Weights of the reference over the electrodes; all zero for none.</summary>
    public double[] ReferenceWeights { get; init; } = [];

    /// <summary>Derivations with their weights.</summary>
    public IReadOnlyList<(string Name, double[] Weights)> Derivations { get; init; } = [];

    /// <summary>The generated array, or null.</summary>
    public CoilArrayChoice? Generated { get; init; }

    /// <summary>Referencing of the electrodes; null without EEG.</summary>
    public ChannelOperator? Reference => Electrodes.Count == 0 ? null : ChannelOperator.Reference([.. Electrodes.Select(e => e.Name)], ReferenceWeights);

    /// <summary>Builds the sensors of a study.</summary>
    /// <param name="reading">The study as read.</param>
    /// <param name="inputs">Receives the files that are read.</param>
    /// <param name="warnings">Receives what the user must know.</param>
    /// <exception cref="InputException">A table is wrong, or sensors and head do not fit.</exception>
    public static SensorAssembly Build(StudyReading reading, InputDigests inputs, List<string> warnings)
    {
        try
        {
            return reading.Study.Head switch
            {
                SphereHeadChoice choice => OnSphere(reading, choice.Sphere, inputs, warnings),
                ImportedHeadChoice choice => FromImport(reading, choice, inputs, warnings),
                _ => throw new InvalidOperationException($"no sensors for {reading.Study.Head.GetType().Name}"),
            };
        }
        catch (InputException error) when (error.Problems.All(p => p.File is null))
        {
            // The electrodes know no files: the study gives the place of their keys.
            throw new InputException([.. error.Problems.Select(p => reading.Problem(p.Key ?? "sensors", p.Message))]);
        }
    }

    /// <summary>The study's parts, without noise.</summary>
    public StudySetup Setup(Study study, IReadOnlyList<FilledRegion> regions) => new()
    {
        Study = study,
        Head = Head,
        Source = Source,
        Reference = Reference,
        Derivations = Derivations.Count == 0 ? null : ChannelOperator.Derivations([.. Derivations.Select(d => d.Name)], [.. Derivations.Select(d => d.Weights)], Electrodes.Count),
        MegNames = MegNames,
        MegKinds = MegKinds,
        MegSites = [.. Channels.Select(c => c.Site)],
        MegReported = MegReported,
        Regions = regions,
        FieldCaptured = Sphere is { } sphere && Generated is { } array && MegReported
            ? region => ArrayCoverage.OfRegion(region.Name, region.Positions, sphere, array).Share
            : _ => null,
        CentreSensitivity = (region, deviations) => Sphere is { } sphere && MegReported && (region.Centroid - sphere.Centre).Norm <= CentreShift.Near
            ? CentreShift.Of(region.Centroid, sphere.Centre, Channels, deviations)
            : null,
        Scene = Scene(regions),
    };

    private static SensorAssembly OnSphere(StudyReading reading, LayeredSphere sphere, InputDigests inputs, List<string> warnings)
    {
        Study study = reading.Study;
        IReadOnlyList<Electrode> electrodes = study.Eeg is null ? [] : PlaceElectrodes(study, sphere, inputs, warnings);
        IReadOnlyList<MegChannel> channels = study.Meg is null ? SplitArray(sphere) : MegChannels(study.Meg, sphere, inputs, warnings);
        if (study.Meg is null)
        {
            warnings.Add($"no MEG array is stated: a built-in one of {SplitSites} magnetometers {SplitGap * 1000:0} mm from the scalp serves to split the directions, and for nothing else");
        }

        return new SensorAssembly
        {
            Head = sphere,
            Source = new SphereLeadfield(sphere, electrodes, channels),
            Electrodes = electrodes,
            Channels = channels,
            MegNames = [.. channels.Select(c => c.Name)],
            MegKinds = [.. channels.Select(c => c.Kind)],
            MegReported = study.Meg is not null,
            ReferenceWeights = study.Eeg is null ? [] : Core.Sensors.ReferenceWeights.Of(study.Eeg.Reference, electrodes),
            Derivations = [.. study.Derivations.Select(d => (d, Derivation.Parse(d, [.. electrodes.Select(e => e.Name)], study.Eeg?.Layout is not null).Weights(electrodes)))],
            Generated = study.Meg?.Generated,
        };
    }

    private static SensorAssembly FromImport(StudyReading reading, ImportedHeadChoice choice, InputDigests inputs, List<string> warnings)
    {
        Study study = reading.Study;
        (ImportedLeadfield leadfield, IReadOnlyList<string> found) =
            ImportedLeadfieldReader.Read(inputs.UseIfNamed(choice.Eeg), inputs.UseIfNamed(choice.Meg), inputs.Use(choice.Points), inputs.Use(choice.Rows));
        warnings.AddRange(found);
        IReadOnlyList<Electrode> electrodes = [.. leadfield.EegChannels.Select(c => new Electrode(c.Name, c.Position ?? Vec3.Zero, true, 0))];
        ReferenceChoice reference = study.Eeg?.Reference ?? new ReferenceChoice(ReferenceKind.Average, []);
        if (leadfield.MegChannels.Count == 0)
        {
            warnings.Add("the imported leadfields hold no MEG: directions cannot be split, so that only isotropic, best and given figures are reported");
        }

        return new SensorAssembly
        {
            Head = new ImportedHead(),
            Source = leadfield,
            Electrodes = electrodes,
            MegNames = [.. leadfield.MegChannels.Select(c => c.Name)],
            MegKinds = [.. leadfield.MegChannels.Select(c => c.Kind ?? CoilKind.Magnetometer)],
            MegReported = leadfield.MegChannels.Count > 0,
            ReferenceWeights = electrodes.Count == 0 ? [] : Core.Sensors.ReferenceWeights.Of(reference, electrodes),
            Derivations = [.. study.Derivations.Select(d => (d, Derivation.Parse(d, [.. electrodes.Select(e => e.Name)], false).Weights(electrodes)))],
        };
    }

    private static Electrode[] PlaceElectrodes(Study study, LayeredSphere sphere, InputDigests inputs, List<string> warnings)
    {
        EegChoice choice = study.Eeg!;
        if (choice.Layout is { } layout)
        {
            IReadOnlyList<string> names = ElectrodeLayout.Names(layout);
            string[] joined =
            [
                .. study.Derivations.SelectMany(d => Derivation.Parse(d, names).Joined),
                .. study.Noise?.EegTotal is { } total ? Derivation.Parse(total.Derivation, names, true, "noise.eeg_total.derivation").Joined : [],
                .. Core.Sensors.ReferenceWeights.Joined(choice.Reference, names),
            ];
            return ElectrodeLayout.OnSphere(layout, sphere, joined.Distinct());
        }

        (string path, string display) = inputs.Use(choice.ElectrodesFile!);
        (string Path, string Display)? coordinates = inputs.UseIfNamed(choice.CoordinatesFile);
        ElectrodesTable table = ElectrodesTable.Read(path, display, coordinates?.Path, coordinates?.Display);
        warnings.AddRange(table.Warnings);
        Electrode[] placed = ElectrodePlacement.OnSphere([.. table.Electrodes.Select(e => e.Name)], [.. table.Electrodes.Select(e => e.Position)], sphere, display);
        Electrode farthest = placed.MaxBy(e => e.MovedBy)!;
        if (farthest.MovedBy > MovedEnough)
        {
            warnings.Add(string.Create(System.Globalization.CultureInfo.InvariantCulture,
                $"{display}: electrodes were moved along their direction onto the outer sphere, by {placed.Average(e => e.MovedBy) * 1000:0.0} mm on average and {farthest.MovedBy * 1000:0.0} mm at most ({farthest.Name})"));
        }

        return placed;
    }

    // Below this an electrode's move onto the sphere is rounding of its table.
    private const double MovedEnough = 1e-4;

    private static IReadOnlyList<MegChannel> MegChannels(MegChoice choice, LayeredSphere sphere, InputDigests inputs, List<string> warnings)
    {
        if (choice.Generated is { } generated)
        {
            return CoilArray.Generate(generated, sphere.Centre, sphere.OuterRadius);
        }

        (string path, string display) = inputs.Use(choice.CoilsFile!);
        CoilsTable table = CoilsTable.Read(path, display);
        warnings.AddRange(table.Warnings);
        SphereLeadfield.CheckCoils(sphere, table.Channels, display);
        return table.Channels;
    }

    private static MegChannel[] SplitArray(LayeredSphere sphere) =>
        CoilArray.Generate(new CoilArrayChoice("magnetometer", SplitSites, 0, SplitGap, CoilArray.DefaultEdgeFront, CoilArray.DefaultEdgeBack), sphere.Centre, sphere.OuterRadius);

    private Scene Scene(IReadOnlyList<FilledRegion> regions) => new()
    {
        Centre = Sphere?.Centre,
        Layers = Sphere is null ? [] : [.. Sphere.Layers.Select(l => (l.Tissue, l.OuterRadius))],
        Electrodes = Sphere is null ? [] : [.. Electrodes.Select(e => (e.Name, e.Position))],
        CoilSites = MegReported ? [.. Channels.Select(c => c.Site).Distinct()] : [],
        Regions = [.. regions.Select(r => (r.Name, Picked(r.Positions)))],
    };

    private static Vec3[] Picked(Vec3[] positions)
    {
        const int most = 2000;
        return positions.Length <= most ? positions : [.. Enumerable.Range(0, most).Select(k => positions[(long)k * positions.Length / most])];
    }
}
