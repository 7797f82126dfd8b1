using DeepSourceCheck.Core.Directions;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Imported;
using DeepSourceCheck.Core.Planning;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Studies;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>What the leadfields of a head take, beside what every run takes.</summary>
/// <param name="Bytes">Peak memory [bytes].</param>
/// <param name="Seconds">Time [s] on this machine's processors.</param>
internal readonly record struct LeadfieldCost(long Bytes, double Seconds);

/// <summary>Leadfields of the sensors to which the noise tables refer.</summary>
/// <param name="Source">The tables' three electrodes and their magnetometers.</param>
/// <param name="Electrodes">Cz, M1, M2.</param>
internal sealed record TableSensors(ILeadfieldSource Source, IReadOnlyList<Electrode> Electrodes)
{
    /// <summary>The electrodes' names.</summary>
    public static readonly IReadOnlyList<string> Names = ["Cz", "M1", "M2"];

    // Sites of the magnetometers to which the MEG table refers.
    private const int Sites = 200;

    /// <summary>The magnetometers' array.</summary>
    public static CoilArrayChoice Array { get; } =
        new("magnetometer", Sites, 0, Core.Noise.DefaultNoiseTables.MagnetometerGap, CoilArray.DefaultEdgeFront, CoilArray.DefaultEdgeBack);
}

/// <summary>Head, electrodes, coils and leadfields of a study. One class a kind of head; no stage after them asks which.</summary>
internal abstract class SensorAssembly
{
    // Sites of the array that serves the split alone where a study has no MEG: magnetometers all around, near enough to see every tangential direction.
    private const int SplitSites = 300;
    private const double SplitGap = 0.020;

    /// <summary>Head.</summary>
    public abstract IHead Head { get; }

    /// <summary>Leadfields, unreferenced. Before <see cref="Compute"/> some heads know the number of rows alone.</summary>
    public abstract ILeadfieldSource Source { get; }

    /// <summary>The imported leadfields, whose points a region selects by name; null for computed heads.</summary>
    public virtual ImportedLeadfield? Imported => null;

    /// <summary>Factor by which library regions scale about <see cref="LibraryCentre"/>.</summary>
    public virtual double LibraryScale => 1;

    /// <summary>Fixed point of that scale [m].</summary>
    public virtual Vec3 LibraryCentre => Vec3.Zero;

    /// <summary>True once the leadfields can be asked for.</summary>
    public virtual bool IsComputed => true;

    /// <summary>Electrodes; for imported leadfields without places.</summary>
    public IReadOnlyList<Electrode> Electrodes { get; protected init; } = [];

    /// <summary>MEG channels of a computed head, the split's own where the study has none.</summary>
    public IReadOnlyList<MegChannel> Channels { get; protected init; } = [];

    /// <summary>Names of the MEG rows.</summary>
    public IReadOnlyList<string> MegNames { get; protected init; } = [];

    /// <summary>Kinds of the MEG rows.</summary>
    public IReadOnlyList<CoilKind> MegKinds { get; protected init; } = [];

    /// <summary>False where the MEG rows serve the split alone.</summary>
    public bool MegReported { get; protected init; }

    /// <summary>Weights of the reference over the electrodes; all zero for none.</summary>
    public double[] ReferenceWeights { get; protected init; } = [];

    /// <summary>Derivations with their weights.</summary>
    public IReadOnlyList<(string Name, double[] Weights)> Derivations { get; protected init; } = [];

    /// <summary>The generated array, or null.</summary>
    public CoilArrayChoice? Generated { get; protected init; }

    /// <summary>Referencing of the electrodes; null without EEG.</summary>
    public ChannelOperator? Reference => Electrodes.Count == 0 ? null : ChannelOperator.Reference([.. Electrodes.Select(e => e.Name)], ReferenceWeights);

    /// <summary>The array that serves the split alone.</summary>
    protected static CoilArrayChoice SplitArray { get; } =
        new("magnetometer", SplitSites, 0, SplitGap, CoilArray.DefaultEdgeFront, CoilArray.DefaultEdgeBack);

    /// <summary>What the user must know where a region of the library may not lie where it should in this head; null where nothing speaks against it.</summary>
    /// <param name="region">Name of the region.</param>
    /// <exception cref="InputException">The library cannot be meant for this head.</exception>
    public virtual string? LibraryMisfit(string region) => null;

    /// <summary>Builds the sensors of a study.</summary>
    /// <param name="reading">The study as read.</param>
    /// <param name="inputs">Receives the files that are read.</param>
    /// <param name="purpose">What the sensors are for: leadfields alone need no array for the split and no noise.</param>
    /// <param name="settings">Memory budget, cancellation.</param>
    /// <param name="warnings">Receives what the user must know.</param>
    /// <exception cref="InputException">A file is wrong, or sensors and head do not fit.</exception>
    public static SensorAssembly Build(StudyReading reading, InputDigests inputs, Purpose purpose, RunSettings settings, List<string> warnings)
    {
        try
        {
            return reading.Study.Head switch
            {
                SphereHeadChoice choice => new OnSphere(reading.Study, choice, inputs, warnings),
                VoxelHeadChoice choice => new OnVoxels(reading, choice, VoxelHeadAssembly.Build(reading, choice, inputs, settings, warnings), settings.VoxelParts, inputs, purpose, warnings),
                ImportedHeadChoice choice => new FromImport(reading.Study, choice, inputs, warnings),
                _ => throw new InvalidOperationException($"no sensors for {reading.Study.Head.GetType().Name}"),
            };
        }
        catch (InputException error) when (error.Problems.All(p => p.File is null))
        {
            // The electrodes know no files: the study gives the place of their keys.
            throw new InputException([.. error.Problems.Select(p => reading.Problem(p.Key ?? "sensors", p.Message))]);
        }
    }

    /// <summary>What the leadfields will take.</summary>
    /// <param name="regions">The filled regions.</param>
    public virtual LeadfieldCost Cost(IReadOnlyList<FilledRegion> regions) => default;

    /// <summary>Refuses leadfields that would not fit, before any is computed.</summary>
    /// <param name="regions">The filled regions.</param>
    /// <param name="settings">Memory budget.</param>
    /// <exception cref="InputException">They would not fit into the budget, or not at all.</exception>
    public virtual void RefuseTooLarge(IReadOnlyList<FilledRegion> regions, RunSettings settings)
    {
    }

    /// <summary>Computes what must be computed before any leadfield can be asked for; nothing on spheres and imported leadfields.</summary>
    /// <param name="regions">The filled regions.</param>
    /// <param name="settings">Progress, cancellation.</param>
    /// <exception cref="NotSolvedException">The equations of a head were not solved.</exception>
    public virtual void Compute(IReadOnlyList<FilledRegion> regions, RunSettings settings)
    {
    }

    /// <summary>The sensors to which the noise tables refer; null where the head knows no places.</summary>
    public abstract TableSensors? Tables();

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
        FieldCaptured = FieldCaptured,
        CentreSensitivity = CentreSensitivity,
        OtherHeads = study.Responses.Any(r => r.EegMeasure == Names.RealisticFilter || r.MegMeasure == Names.RealisticFilter) ? OtherHeads() : [],
        NearestPoint = Imported is { } imported ? imported.Nearest : null,
        Perturbable = Perturbable,
        Limits = Limits,
        ArrayPlace = ArrayPlace,
        Scene = Scene(regions) with
        {
            CoilSites = MegReported ? [.. Channels.Select(c => c.Site).Distinct()] : [],
            Regions = [.. regions.Select(r => Place(r.Name, Picked(r.Positions)))],
        },
    };

    /// <summary>Leadfields of other heads for which a spatial filter may have been built; empty where this head has no others.</summary>
    protected virtual IReadOnlyList<ILeadfieldSource> OtherHeads() => [];

    /// <summary>The head with what is not known of it; null where it cannot be varied.</summary>
    protected virtual IPerturbableHead? Perturbable => null;

    /// <summary>What the head's model leaves out, sentence by sentence.</summary>
    protected abstract IReadOnlyList<string> Limits { get; }

    /// <summary>One sentence on where a generated array lies; null where the study states all there is to know.</summary>
    protected virtual string? ArrayPlace => null;

    /// <summary>Head and electrodes for figures.</summary>
    /// <param name="regions">The filled regions.</param>
    protected abstract Scene Scene(IReadOnlyList<FilledRegion> regions);

    /// <summary>Share of the largest field around the head that a generated array captures of a region; null where not known.</summary>
    protected virtual double? FieldCaptured(FilledRegion region) => null;

    /// <summary>What becomes of a region's MEG when a sphere's centre moves; null where that is not asked.</summary>
    protected virtual CentreSensitivity? CentreSensitivity(FilledRegion region, IReadOnlyList<double> deviations) => null;

    /// <summary>Says that an array was put in for the split alone.</summary>
    protected static void WarnOfSplitArray(List<string> warnings) =>
        warnings.Add($"no MEG array is stated: a built-in one of {SplitSites} magnetometers {SplitGap * 1000:0} mm from the scalp serves to split the directions, and for nothing else");

    /// <summary>Weights of the study's derivations over its electrodes.</summary>
    /// <param name="study">The study.</param>
    /// <param name="electrodes">Its electrodes.</param>
    /// <param name="known">True where the names are those of a layout.</param>
    protected static (string Name, double[] Weights)[] Weights(Study study, IReadOnlyList<Electrode> electrodes, bool known) =>
        [.. study.Derivations.Select(d => (d, Derivation.Parse(d, [.. electrodes.Select(e => e.Name)], known).Weights(electrodes)))];

    /// <summary>Sites that join a layout because a derivation, the stated total or the reference names them.</summary>
    protected static IEnumerable<string> Joined(Study study, string layout)
    {
        IReadOnlyList<string> names = ElectrodeLayout.Names(layout);
        string[] joined =
        [
            .. study.Derivations.SelectMany(d => Derivation.Parse(d, names).Joined),
            .. study.Noise?.EegTotal is { } total ? Derivation.Parse(total.Derivation, names, true, "noise.eeg_total.derivation").Joined : [],
            .. Core.Sensors.ReferenceWeights.Joined(study.Eeg!.Reference, names),
        ];
        return joined.Distinct();
    }

    // The middle one of the dipoles' depths: the centre of a region that is spread out, such as cortex, is none of its places.
    private SceneRegion Place(string name, Vec3[] points)
    {
        double[] depths = [.. points.Select(Head.Depth).OfType<double>().Order()];
        return new(name, points, depths.Length > 0 ? depths[depths.Length / 2] : null);
    }

    private static Vec3[] Picked(Vec3[] positions)
    {
        const int most = 2000;
        return positions.Length <= most ? positions : [.. Enumerable.Range(0, most).Select(k => positions[(long)k * positions.Length / most])];
    }
}
