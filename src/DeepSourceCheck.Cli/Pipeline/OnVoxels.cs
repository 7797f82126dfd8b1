using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Voxels;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Studies;
using DeepSourceCheck.Files.Tables;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>Sensors about a head of voxels. Until <see cref="Compute"/> its leadfields are a plan: `check` never solves.</summary>
internal sealed class OnVoxels : SensorAssembly
{
    // The library's frame: sphere fitted to the inner skull of a real head in MNI space. A head that departs by more is warned of, and refused where the library cannot be meant.
    private static readonly Vec3 LibraryHead = new(0.0005, -0.0178, 0.0059);
    private const double LibraryRadius = 0.081, WarnOffset = 0.006, MostOffset = 0.020, WarnRadius = 0.07, MostRadius = 0.20;

    private readonly StudyReading _reading;
    private readonly VoxelHeadChoice _choice;
    private readonly BuiltVoxelHead _built;
    private readonly VoxelParts _parts;
    private readonly List<string> _warnings;
    private readonly IVoxelSensors _sensors;
    private readonly Lazy<IReadOnlyList<Vec3>> _background;
    private readonly Lazy<VoxelCost> _cost;
    private ILeadfieldSource _source;
    private TableSensors? _tables;
    private readonly bool _assess;

    /// <param name="reading">The study as read.</param>
    /// <param name="choice">Its head.</param>
    /// <param name="built">The head as its files give it.</param>
    /// <param name="parts">Placement and solver.</param>
    /// <param name="inputs">Receives the files that are read.</param>
    /// <param name="purpose">What the sensors are for.</param>
    /// <param name="warnings">Receives what the user must know.</param>
    public OnVoxels(StudyReading reading, VoxelHeadChoice choice, BuiltVoxelHead built, VoxelParts parts, InputDigests inputs, Purpose purpose, List<string> warnings)
    {
        (_reading, _choice, _built, _parts, _warnings) = (reading, choice, built, parts, warnings);
        Study study = reading.Study;
        _sensors = _parts.Sensors(built, choice.Landmarks);
        Electrodes = study.Eeg is null ? [] : Place(study, inputs, warnings);
        _assess = purpose == Purpose.Assess;
        Channels = study.Meg is { } meg ? MegChannels(meg, inputs, warnings) : _assess ? _sensors.Array(SplitArray) : [];
        if (study.Meg is null && _assess)
        {
            WarnOfSplitArray(warnings);
        }

        _source = new PlannedLeadfield(Electrodes.Count, Channels.Count);
        _cost = new(() => new VoxelCost(built.Head.Volume));
        _background = new(() => built.Head.BackgroundPlaces(NoiseAssembly.BackgroundPlaces));
        MegNames = [.. Channels.Select(c => c.Name)];
        MegKinds = [.. Channels.Select(c => c.Kind)];
        MegReported = study.Meg is not null;
        if (WantsBackground)
        {
            _ = _sensors.Sites(TableSensors.Names);          // whatever is wrong with the landmarks shows now, not after the rows were solved for
        }

        warnings.AddRange(_sensors.Warnings);
        ReferenceWeights = study.Eeg is null ? [] : Core.Sensors.ReferenceWeights.Of(study.Eeg.Reference, Electrodes);
        Derivations = Weights(study, Electrodes, study.Eeg?.Layout is not null);
        Generated = study.Meg?.Generated;
    }

    /// <inheritdoc/>
    public override IHead Head => _built.Head;

    /// <inheritdoc/>
    public override ILeadfieldSource Source => _source;

    /// <inheritdoc/>
    public override bool IsComputed => _source is not PlannedLeadfield;

    private bool WantsBackground => _assess && NoiseAssembly.WantsBackground(_reading.Study, this);

    // The tables' magnetometers lie 20 mm from the scalp everywhere: on a real head site by site, not on a rigid helmet whose smallest gap that is.
    private static CoilArrayChoice TableArray => TableSensors.Array with { Coil = "on-scalp" };

    /// <inheritdoc/>
    public override string? LibraryMisfit(string region)
    {
        FittedSphere sphere = _built.Head.Sphere.Sphere;
        double offset = (sphere.Centre - LibraryHead).Norm, radius = sphere.Radius / LibraryRadius - 1;
        string facts = string.Create(CultureInfo.InvariantCulture,
            $"library regions are drawn for an adult head in MNI space (mm), inner skull of radius {LibraryRadius * 1000:0} mm about ({LibraryHead.X * 1000:0}, {LibraryHead.Y * 1000:0}, {LibraryHead.Z * 1000:0}); in {_choice.Labels} it has {sphere.Radius * 1000:0} mm about ({sphere.Centre.X * 1000:0}, {sphere.Centre.Y * 1000:0}, {sphere.Centre.Z * 1000:0})");
        return offset > MostOffset || Math.Abs(radius) > MostRadius
            ? throw new InputException(null, null, $"region '{region}': {facts}: give a mask that fits this head, or bring the volume into that space")
            : offset > WarnOffset || Math.Abs(radius) > WarnRadius ? $"{facts}: {region} and its like may lie elsewhere in this head; compare with a mask" : null;
    }

    /// <inheritdoc/>
    public override LeadfieldCost Cost(IReadOnlyList<FilledRegion> regions)
    {
        // The tables' sensors are solved after the study's own, whose rows stay meanwhile.
        long dipoles = regions.Sum(r => (long)r.Positions.Length);
        int rows = Electrodes.Count + Channels.Count;
        return WantsBackground
            ? _cost.Value.Of((rows, dipoles + NoiseAssembly.BackgroundPlaces, true), (TableSensors.Names.Count + TableSensors.Array.Sites, NoiseAssembly.BackgroundPlaces, false))
            : _cost.Value.Of(rows, dipoles, reusable: true);
    }

    /// <inheritdoc/>
    public override void RefuseTooLarge(IReadOnlyList<FilledRegion> regions, RunSettings settings)
    {
        long bytes = Cost(regions).Bytes;
        if (settings.MemoryBudget is { } limit && bytes > limit)
        {
            throw TooLarge(string.Create(CultureInfo.InvariantCulture,
                $"the finite elements on {_choice.Labels} would need about {MemorySize.Rough(bytes)} of memory, more than the {MemorySize.Rough(limit)} that --memory allows; voxels larger than the {Edges()} mm here, or fewer sensors and dipoles, need less"));
        }

        // The nodes are counted one by one only where the most that dipoles can use would not fit.
        int sensors = Electrodes.Count + Channels.Count;
        long dipoles = regions.Sum(r => (long)r.Positions.Length) + (WantsBackground ? NoiseAssembly.BackgroundPlaces : 0);
        if (TransferRows.ValuesFor(Math.Min(_cost.Value.SourceNodes, dipoles * DipoleLoad.MostNodes), sensors) > _parts.MostRowValues
            && _parts.Solver(_built, _choice).KeptNodes(Own(regions)) is var nodes && TransferRows.ValuesFor(nodes, sensors) > _parts.MostRowValues)
        {
            throw TooLarge(string.Create(CultureInfo.InvariantCulture,
                $"the {dipoles:#,0} dipoles use {nodes:#,0} nodes of the finite elements on {_choice.Labels}, and {nodes:#,0} nodes x {sensors:#,0} sensors are more values than can be kept ({_parts.MostRowValues:#,0}); a wider spacing_mm, fewer regions or sensors, or voxels larger than the {Edges()} mm here need fewer"));
        }
    }

    /// <inheritdoc/>
    public override void Compute(IReadOnlyList<FilledRegion> regions, RunSettings settings)
    {
        // One solver for both, dropped with its matrix when both are done.
        IVoxelSolver solver = _parts.Solver(_built, _choice);
        _source = solver.Solve(Own(regions), settings, _warnings);
        if (WantsBackground)
        {
            IReadOnlyList<Vec3> sites = _sensors.Sites(TableSensors.Names);
            Electrode[] electrodes = [.. TableSensors.Names.Select((n, k) => new Electrode(n, sites[k], true, 0))];
            var problem = new VoxelProblem("leadfields of the noise tables' sensors", electrodes, _sensors.Array(TableArray), _background.Value, Reusable: false);
            _tables = new(solver.Solve(problem, settings, _warnings), electrodes);
        }
    }

    /// <inheritdoc/>
    public override TableSensors Tables() => _tables ?? throw new InvalidOperationException("The tables' leadfields were asked for before the study's were computed.");

    /// <inheritdoc/>
    protected override IReadOnlyList<string> Limits => [.. VoxelLimits.Of(_built.Head.Volume, _choice), .. ArrayPlace is { } place ? [place + "."] : Array.Empty<string>()];

    /// <inheritdoc/>
    protected override string? ArrayPlace => Generated is { } array ? _sensors.Describe(array) : null;

    /// <inheritdoc/>
    protected override Scene Scene(IReadOnlyList<FilledRegion> regions)
    {
        // Cut where most of what is asked about lies: each region's centre counts once.
        Vec3 cut = regions.Count == 0 ? _sensors.Centre : regions.Aggregate(Vec3.Zero, (sum, r) => sum + r.Centroid) / regions.Count;
        return new()
        {
            Centre = _sensors.Centre,
            Outlines = IsComputed ? HeadSections.Of(_built.AsInFile, cut) : [],
            Cut = cut,
            Electrodes = [.. Electrodes.Select(e => (e.Name, e.Position))],
        };
    }

    private VoxelProblem Own(IReadOnlyList<FilledRegion> regions)
    {
        IEnumerable<Vec3> places = regions.SelectMany(r => r.Positions);
        return new("leadfields", Electrodes, Channels, [.. WantsBackground ? places.Concat(_background.Value) : places], Reusable: true);
    }

    private InputException TooLarge(string message) => new([_reading.Problem("head.voxels.labels", message)]);

    private string Edges()
    {
        Affine map = _built.Head.Volume.Grid.ToWorld;
        return string.Create(CultureInfo.InvariantCulture, $"{map.Column(0).Norm * 1000:0.##} x {map.Column(1).Norm * 1000:0.##} x {map.Column(2).Norm * 1000:0.##}");
    }

    private IReadOnlyList<Electrode> Place(Study study, InputDigests inputs, List<string> warnings)
    {
        EegChoice choice = study.Eeg!;
        if (choice.Layout is { } layout)
        {
            string[] names = [.. ElectrodeLayout.Names(layout).Concat(Joined(study, layout)).Distinct()];
            IReadOnlyList<Vec3> sites = _sensors.Sites(names);
            return [.. names.Select((name, k) => new Electrode(name, sites[k], name is not ("M1" or "M2"), 0))];
        }

        (string path, string display) = inputs.Use(choice.ElectrodesFile!);
        (string Path, string Display)? coordinates = inputs.UseIfNamed(choice.CoordinatesFile);
        ElectrodesTable table = ElectrodesTable.Read(path, display, coordinates?.Path, coordinates?.Display);
        warnings.AddRange(table.Warnings);
        return _sensors.Project([.. table.Electrodes.Select(e => e.Name)], [.. table.Electrodes.Select(e => e.Position)], display);
    }

    private IReadOnlyList<MegChannel> MegChannels(MegChoice choice, InputDigests inputs, List<string> warnings)
    {
        if (choice.Generated is { } generated)
        {
            return _sensors.Array(generated);
        }

        (string path, string display) = inputs.Use(choice.CoilsFile!);
        CoilsTable table = CoilsTable.Read(path, display);
        warnings.AddRange(table.Warnings);
        _sensors.CheckCoils(table.Channels, display);
        return table.Channels;
    }

    /// <summary>The rows that a run would compute; nothing can be asked of them.</summary>
    private sealed class PlannedLeadfield(int electrodes, int channels) : ILeadfieldSource
    {
        public int EegRows => electrodes;

        public int MegRows => channels;

        public LeadfieldMethod Method => throw new InvalidOperationException("A leadfield was asked for before it was computed.");

        public void Fill(LeadfieldBlock block) => throw new InvalidOperationException("A leadfield was asked for before it was computed.");
    }
}
