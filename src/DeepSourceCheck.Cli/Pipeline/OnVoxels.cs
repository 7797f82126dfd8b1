using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Leadfields;
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
    private readonly StudyReading _reading;
    private readonly VoxelHeadChoice _choice;
    private readonly BuiltVoxelHead _built;
    private readonly VoxelParts _parts;
    private readonly List<string> _warnings;
    private readonly IVoxelSensors _sensors;
    private readonly Lazy<IReadOnlyList<Vec3>> _background;
    private ILeadfieldSource _source;
    private TableSensors? _tables;

    /// <param name="reading">The study as read.</param>
    /// <param name="choice">Its head.</param>
    /// <param name="built">The head as its files give it.</param>
    /// <param name="parts">Placement and solver.</param>
    /// <param name="inputs">Receives the files that are read.</param>
    /// <param name="warnings">Receives what the user must know.</param>
    public OnVoxels(StudyReading reading, VoxelHeadChoice choice, BuiltVoxelHead built, VoxelParts parts, InputDigests inputs, List<string> warnings)
    {
        (_reading, _choice, _built, _parts, _warnings) = (reading, choice, built, parts, warnings);
        Study study = reading.Study;
        _sensors = _parts.Sensors(built, choice.Landmarks);
        Electrodes = study.Eeg is null ? [] : Place(study, inputs, warnings);
        Channels = study.Meg is null ? _sensors.Array(SplitArray) : MegChannels(study.Meg, inputs, warnings);
        if (study.Meg is null)
        {
            WarnOfSplitArray(warnings);
        }

        warnings.AddRange(_sensors.Warnings);
        _source = new PlannedLeadfield(Electrodes.Count, Channels.Count);
        _background = new(() => built.Head.BackgroundPlaces(NoiseAssembly.BackgroundPlaces));
        MegNames = [.. Channels.Select(c => c.Name)];
        MegKinds = [.. Channels.Select(c => c.Kind)];
        MegReported = study.Meg is not null;
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

    private bool WantsBackground => NoiseAssembly.WantsBackground(_reading.Study, this);

    /// <inheritdoc/>
    public override LeadfieldCost Cost(IReadOnlyList<FilledRegion> regions)
    {
        // The tables' sensors are solved after the study's own: their time adds, of the memory only the larger counts.
        long dipoles = regions.Sum(r => (long)r.Positions.Length);
        LeadfieldCost own = VoxelCost.Of(_built.Head.Volume, Electrodes.Count + Channels.Count, dipoles + (WantsBackground ? NoiseAssembly.BackgroundPlaces : 0), reusable: true);
        if (!WantsBackground)
        {
            return own;
        }

        LeadfieldCost tables = VoxelCost.Of(_built.Head.Volume, TableSensors.Names.Count + TableSensors.Array.Sites, NoiseAssembly.BackgroundPlaces, reusable: false);
        return new(Math.Max(own.Bytes, tables.Bytes), own.Seconds + tables.Seconds);
    }

    /// <inheritdoc/>
    public override void Compute(IReadOnlyList<FilledRegion> regions, RunSettings settings)
    {
        long bytes = Cost(regions).Bytes;
        if (settings.MemoryBudget is { } limit && bytes > limit)
        {
            Vec3 edge = new(_built.Head.Volume.Grid.ToWorld.Column(0).Norm, _built.Head.Volume.Grid.ToWorld.Column(1).Norm, _built.Head.Volume.Grid.ToWorld.Column(2).Norm);
            throw new InputException([_reading.Problem("head.voxels.labels", string.Create(CultureInfo.InvariantCulture,
                $"the finite elements on {_choice.Labels} would need about {MemorySize.Rough(bytes)} of memory, more than the {MemorySize.Rough(limit)} that --memory allows; voxels larger than the {edge.X * 1000:0.##} x {edge.Y * 1000:0.##} x {edge.Z * 1000:0.##} mm here, or fewer sensors and dipoles, need less"))]);
        }

        if (settings.CheckOnly)
        {
            return;
        }

        // One solver for both, dropped with its matrix when both are done.
        IVoxelSolver solver = _parts.Solver(_built, _choice);
        IEnumerable<Vec3> places = regions.SelectMany(r => r.Positions);
        _source = solver.Solve(new("leadfields", Electrodes, Channels, [.. WantsBackground ? places.Concat(_background.Value) : places], Reusable: true), settings, _warnings);
        if (WantsBackground)
        {
            IReadOnlyList<Vec3> sites = _sensors.Sites(TableSensors.Names);
            Electrode[] electrodes = [.. TableSensors.Names.Select((n, k) => new Electrode(n, sites[k], true, 0))];
            var problem = new VoxelProblem("leadfields of the noise tables' sensors", electrodes, _sensors.Array(TableSensors.Array), _background.Value, Reusable: false);
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
