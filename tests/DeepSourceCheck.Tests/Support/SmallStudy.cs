using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Planning;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Tests.Support;

/// <summary>A study from arrays, for tests of the stages after the leadfield.</summary>
internal sealed record SmallStudy
{
    /// <summary>[point][electrode][axis], V/(A m).</summary>
    public double[][][] Eeg { get; init; } = [];

    /// <summary>[point][channel][axis], T/(A m).</summary>
    public double[][][] Meg { get; init; } = [];

    public double[]? EegCovariance { get; init; }

    public double[]? MegCovariance { get; init; }

    public double[]? Cross { get; init; }

    public double? EegSamples { get; init; }

    public double? MegSamples { get; init; }

    /// <summary>Weights over the electrodes; null: average.</summary>
    public double[]? Reference { get; init; }

    public bool Unreferenced { get; init; }

    public IReadOnlyList<(string Name, double[] Weights)> Derivations { get; init; } = [];

    public double Moment { get; init; } = 1e-8;

    public AmplitudeChoice? Amplitude { get; init; }

    public MomentRange? MomentRange { get; init; }

    public IReadOnlyList<double> Shares { get; init; } = [];

    public IReadOnlyList<double> Lags { get; init; } = [];

    public double? ComponentFrequency { get; init; }

    public Band Band { get; init; } = new(1, 100);

    public WaveformChoice? Waveform { get; init; }

    public double Jitter { get; init; }

    public SteadyState? Steady { get; init; }

    public double PlaceError { get; init; }

    public IReadOnlyList<RatePoint> RateCurve { get; init; } = [];

    public double? Window { get; init; }

    /// <summary>Noise in place of the covariances.</summary>
    public NoiseModel? Noise { get; init; }

    public Vec3? Given { get; init; }

    public DirectionName Direction { get; init; } = DirectionName.Given;

    public Measured Measured { get; init; }

    public double ArtefactEeg { get; init; }

    public double ArtefactMeg { get; init; }

    public string? EegMeasure { get; init; }

    public string? MegMeasure { get; init; }

    public IReadOnlyList<TargetChoice> Targets { get; init; } = [new AmplitudeRatioChoice(3)];

    public Protocol? Protocol { get; init; } = new() { Rate = 10, Session = 600 };

    public IReadOnlyList<CompetitorChoice> Competitors { get; init; } = [];

    public bool ChooseSensors { get; init; }

    public bool Together { get; init; }

    /// <summary>Regions of the response; null: all.</summary>
    public int? RegionsOfResponse { get; init; }

    /// <summary>Splits the points into this many regions.</summary>
    public int Regions { get; init; } = 1;

    public IHead Head { get; init; } = new ImportedHead();

    public Vec3[]? Positions { get; init; }

    /// <summary>Place in the cortex of each point; null: no region is cortex.</summary>
    public CorticalPlace?[]? CorticalPlaces { get; init; }

    public int Points => Math.Max(Eeg.Length, Meg.Length);

    public IReadOnlyList<string> ElectrodeNames => [.. Enumerable.Range(0, Eeg.Length == 0 ? 0 : Eeg[0].Length).Select(k => $"E{k}")];

    public StudySetup Setup()
    {
        int n = ElectrodeNames.Count, m = Meg.Length == 0 ? 0 : Meg[0].Length;
        var response = new Response
        {
            Name = "r",
            Key = "responses.r",
            Regions = [.. Enumerable.Range(0, RegionsOfResponse ?? Regions).Select(k => $"region{k}")],
            Competitors = Competitors,
            ChooseSensors = ChooseSensors,
            Moment = Moment,
            Amplitude = Amplitude,
            MomentRange = MomentRange,
            Shares = Shares,
            Lags = Lags,
            ComponentFrequency = ComponentFrequency,
            Band = Steady?.Bin ?? Band,
            Steady = Steady,
            Waveform = Waveform,
            Jitter = Jitter,
            PlaceError = PlaceError,
            RateCurve = RateCurve,
            Window = Window,
            Measured = Measured,
            Together = Together,
            Direction = new DirectionChoice(Given is null && Direction == DirectionName.Given ? DirectionName.Isotropic : Direction, Given),
            LockedArtefactEeg = ArtefactEeg,
            LockedArtefactMeg = ArtefactMeg,
            EegMeasure = EegMeasure,
            MegMeasure = MegMeasure,
        };
        int each = Points / Regions;
        return new StudySetup
        {
            Study = new Study
            {
                File = "small.yaml",
                Folder = ".",
                Title = "small",
                Head = new ImportedHeadChoice(null, null, "", ""),
                Responses = [response],
                Targets = Targets,
                Protocol = Protocol,
            },
            Head = Head,
            Source = new FixedSource(Eeg, Meg),
            Reference = n == 0 ? null : ChannelOperator.Reference(ElectrodeNames, Unreferenced ? null : Reference ?? [.. Enumerable.Repeat(1.0 / n, n)]),
            Derivations = Derivations.Count == 0 ? null : ChannelOperator.Derivations([.. Derivations.Select(d => d.Name)], [.. Derivations.Select(d => d.Weights)], n),
            MegNames = [.. Enumerable.Range(0, m).Select(k => $"M{k}")],
            MegKinds = [.. Enumerable.Repeat(CoilKind.Magnetometer, m)],
            MegReported = m > 0,
            NearestPoint = PointNear,
            Noise = Noise ?? new NoiseModel
            {
                EegRows = n,
                MegRows = m,
                EegPerTrial = EegCovariance ?? Identity(n, 1e-12),
                MegPerTrial = MegCovariance ?? Identity(m, 1e-26),
                EegSamples = EegSamples,
                MegSamples = MegSamples,
            },
            Regions = [.. Enumerable.Range(0, Regions).Select(k => new FilledRegion
            {
                Name = $"region{k}",
                Positions = [.. Enumerable.Range(k * each, each).Select(p => Positions?[p] ?? new Vec3(0.01 * p, 0.02, 0.03))],
                Rows = [.. Enumerable.Range(0, each)],
                SourceIndices = [.. Enumerable.Range(k * each, each)],
                CorticalPlaces = CorticalPlaces?[(k * each)..((k + 1) * each)] ?? [],
            })],
        };
    }

    private int PointNear(Vec3 place) => Enumerable.Range(0, Points).MinBy(p => ((Positions?[p] ?? new Vec3(0.01 * p, 0.02, 0.03)) - place).Norm);

    public RegionResult Assess(IDipoleSink? sink = null) => AssessAll(sink)[0];

    public IReadOnlyList<RegionResult> AssessAll(IDipoleSink? sink = null) => Assessor.Assess(Setup(), sink, null, CancellationToken.None)[0].Regions;

    public static double[] Identity(int n, double variance)
    {
        var c = new double[n * n];
        for (int k = 0; k < n; k++)
        {
            c[k * n + k] = variance;
        }

        return c;
    }

    /// <summary>Leadfields of random rows, [point][row][axis].</summary>
    public static double[][][] Random(Random random, int points, int rows, double scale) =>
        [.. Enumerable.Range(0, points).Select(_ => Enumerable.Range(0, rows).Select(_ => Enumerable.Range(0, 3).Select(_ => scale * (2 * random.NextDouble() - 1)).ToArray()).ToArray())];

    /// <summary>A random positive definite covariance with the given standard deviation.</summary>
    public static double[] RandomCovariance(Random random, int n, double sd)
    {
        double[] a = [.. Enumerable.Range(0, n * n).Select(_ => 2 * random.NextDouble() - 1)];
        var c = new double[n * n];
        for (int i = 0; i < n; i++)
        {
            for (int j = 0; j <= i; j++)
            {
                double sum = i == j ? 0.3 : 0;
                for (int k = 0; k < n; k++)
                {
                    sum += a[i * n + k] * a[j * n + k];
                }

                c[i * n + j] = c[j * n + i] = sum * sd * sd;
            }
        }

        return c;
    }
}
