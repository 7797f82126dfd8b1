using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Directions;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Tests.Report;

/// <summary>
/// Invented assessments, consistent in themselves (counts follow from SNR by the amplitude rule), for tests of what is written about them.
/// Their figures resemble those of the default study; they are no reference values for the physics.
/// </summary>
internal static class AssessmentFixture
{
    public const double Ratio = 3;

    private static readonly DirectionName[] Directions =
    [
        DirectionName.QuasiRadial, DirectionName.Tangential, DirectionName.StrongestTangential, DirectionName.Isotropic, DirectionName.Best, DirectionName.Given,
    ];

    /// <summary>Two regions, EEG 303 and MEG 45,103 trials, session of 23,976.</summary>
    public static Assessment Default() => Build(new Options());

    /// <summary>MEG silent in the verdict's direction, with figures at the leak.</summary>
    public static Assessment Silent() => Build(new Options { Direction = DirectionName.QuasiRadial, MegSilent = true });

    public static Assessment NoProtocol() => Build(new Options { Session = false });

    public static Assessment EegOnly() => Build(new Options { Meg = false });

    public static Assessment MegOnly() => Build(new Options { Eeg = false });

    public static Assessment TwelveRegions() => Build(new Options
    {
        Title = "Twelve deep structures & <one> \"title\" that is long enough to need a second line on the page of a telephone",
        Regions = [.. Enumerable.Range(1, 12).Select(k => $"ventral-posterolateral-thalamus-and-its-border-zone-left-{k}")],
    });

    public static Assessment NeitherFits() => Build(new Options { EegTrials = 80_000, MegTrials = 1_250_000, JointTrials = 75_000 });

    public static Assessment OutOfReach() => Build(new Options { EegTrials = 400_000, MegTrials = 60_000_000, JointTrials = 397_000 });

    public static Assessment BothFit() => Build(new Options { EegTrials = 900, MegTrials = 450, JointTrials = 300 });

    public static Assessment Imported() => Build(new Options { ImportedHead = true });

    /// <summary>A head of voxels: outlines, limits and method as a run states them.</summary>
    public static Assessment Voxels() => Build(new Options { VoxelHead = true });

    public static Assessment WithDetection() => Build(new Options { Detection = true });

    /// <summary>The first region is folded cortex; its last bin of depth holds too few points for a figure.</summary>
    public static Assessment OverCortex()
    {
        Assessment a = Default();
        ProfileBin Bin(double from, double to, int points, double eeg, double meg) => new(from, to, points,
        [
            .. from m in new[] { (Modality.Eeg, Db: eeg), (Modality.Meg, Db: meg) }
               from measure in new[] { (Name: Names.ChannelMean, Plus: 0.0), (Name: Names.BestChannel, Plus: 9.0) }
               select new ProfileFigure(m.Item1, measure.Name, new(m.Db + measure.Plus - 6, m.Db + measure.Plus - 3, m.Db + measure.Plus, m.Db + measure.Plus + 2, m.Db + measure.Plus + 4)),
        ]);
        ProfileBin[] depth = [.. Enumerable.Range(0, 6).Select(k => Bin(0.005 * k, 0.005 * (k + 1), k == 5 ? 4 : 400 - 60 * k, -10 - k, -20 - 3 * k))];
        ProfileBin[] angle = [.. Enumerable.Range(0, 6).Select(k => Bin(Math.PI / 12 * k, Math.PI / 12 * (k + 1), 250, -11, -33 + 2 * k))];
        RegionResult cortex = a.Responses[0].Regions[0] with { Profile = new(depth, angle, [.. depth.Skip(1).Take(4).Select(b => b with { Points = b.Points / 3 })], 37) };
        return a with { Responses = [a.Responses[0] with { Regions = [cortex, .. a.Responses[0].Regions.Skip(1)] }] };
    }

    /// <summary>Noise over frequency: EEG by three causes, one of them with a gap; MEG by two, with sensors that end, the room's terms removed.</summary>
    public static Assessment WithSpectra()
    {
        Assessment a = Default();
        double[] hertz = [.. Enumerable.Range(0, 40).Select(k => Math.Pow(3000, k / 39.0))];
        double?[] Of(Func<double, double?> density) => [.. hertz.Select(density)];
        ReadingSpectrum eeg = new()
        {
            Modality = Modality.Eeg,
            Channel = "Cz-mastoids",
            Unit = "uV/sqrt(Hz)",
            Frequencies = hertz,
            Noise = [new("instrument", 0.3, Of(_ => 0.02)), new("brain", 0.05, Of(f => 4 / f)), new("muscle and electrode", 0.65, Of(f => f < 3 ? null : 0.4 / Math.Sqrt(f)))],
            Total = Of(f => Math.Sqrt(0.0004 + 16 / (f * f) + 0.16 / f)),
            Band = new(100, 1500),
            SignalLevel = 0.0067,
        };
        ReadingSpectrum meg = new()
        {
            Modality = Modality.Meg,
            Channel = "M192",
            Unit = "fT/sqrt(Hz)",
            Frequencies = hertz,
            Noise = [new("instrument", 0.9, Of(_ => 5)), new("brain", 0.1, Of(f => f > 2000 ? null : 40 / Math.Sqrt(f)))],
            Total = Of(f => Math.Sqrt(25 + 1600 / f)),
            Band = new(100, 1500),
            Bandwidth = new(0, 2000),
            SignalLevel = 0.067,
        };
        RegionResult region = a.Responses[0].Regions[0] with { Removal = new(DirectionName.Given, -1.25, -0.5, -0.25, 3.5) };
        return a with { Responses = [a.Responses[0] with { Spectra = [eeg, meg], Regions = [region, .. a.Responses[0].Regions.Skip(1)] }] };
    }

    /// <summary>The first region with competitors, a location in which MEG finds none, and chosen electrodes.</summary>
    public static Assessment WithAttribution()
    {
        Assessment a = Default();
        static Percentiles About(double x) => new(x - 2, x - 1, x, x + 1, x + 2);
        (string, long?)[] Counts(long? n) => [(Names.AmplitudeRatio, n)];
        DerivedNumber[] chain =
        [
            new("P", "power SNR of one trial with the competitors active, median over dipoles and directions", 0.02, "", "", "the run", Grade.Derived),
            new("N", "trials", 450, "", "ceil(9 / P)", "definition", Grade.Derived),
        ];
        RegionResult region = a.Responses[0].Regions[0] with
        {
            Competitors = new(DirectionName.Given, 123,
                [new("cortex", 4e-8, 1911, [new(Modality.Eeg, 39, About(4), [2, 3], About(-5)), new(Modality.Meg, 42, About(60), [], About(-3))])],
                [
                    new(Modality.Eeg, "Cz-mastoids", true, new(0.66, "uV", "Cz-mastoids"), About(-3.5), About(-17), [new(Names.AmplitudeRatio, 303, new(440, 445, 450, 455, null), chain)]),
                    new(Modality.Meg, Names.MatchedFilter, false, null, new(null, null, null, null, null), new(null, null, null, null, null), [new(Names.AmplitudeRatio, 900, new(null, null, null, null, null), [])]),
                ]),
            Location = new(23_976, DirectionName.Given, 64, 0.092,
                [
                    new(Modality.Eeg, new(0.001, 0.0015, 0.002, 0.0025, 0.003), 0.008, new(0.0081, 0.0082, 0.00825, 0.0083, 0.0085), true, []),
                    new(Modality.Meg, new(0.09, 0.1, 0.2, 0.3, null), 0.003, new(0.09, 0.1, 0.2, 0.3, null), false, []),
                ], null),
            Electrodes = new(DirectionName.Given, 123,
                [.. Enumerable.Range(1, 12).Select(k => new ElectrodeStep($"E{k}", k == 1 ? null : -20 + k, Counts(k == 1 ? null : 2400 / k)))],
                [new("E1-E2", -18, Counts(1200)), new("E1-E3", null, Counts(null))]),
        };
        return a with { Responses = [a.Responses[0] with { Regions = [region, .. a.Responses[0].Regions.Skip(1)] }] };
    }

    public static Assessment TwoResponses()
    {
        Assessment a = Default();
        ResponseResult second = Build(new Options { EegTrials = 9_000, MegTrials = 11_000, JointTrials = 5_000 }).Responses[0];
        return a with { Responses = [a.Responses[0], second with { Response = second.Response with { Name = "slow thalamic response", Key = "responses.slow thalamic response" } }] };
    }

    internal sealed record Options
    {
        public string Title { get; init; } = "Click response of the brainstem, adult volunteers";

        public bool Eeg { get; init; } = true;

        public bool Meg { get; init; } = true;

        public bool Session { get; init; } = true;

        public bool MegSilent { get; init; }

        public bool Detection { get; init; }

        /// <summary>The test that the figure of power draws.</summary>
        public ITargetRule Test { get; init; } = new DetectionRule(0.01, 0.9, 1);

        public bool ImportedHead { get; init; }

        public bool VoxelHead { get; init; }

        public DirectionName Direction { get; init; } = DirectionName.Given;

        public double EegTrials { get; init; } = 303;

        public double MegTrials { get; init; } = 45_103;

        public double JointTrials { get; init; } = 301;

        public IReadOnlyList<string> Regions { get; init; } = ["inferior-colliculus-left", "inferior-colliculus-right"];
    }

    public static Assessment Build(Options o)
    {
        Protocol? protocol = o.Session ? new Protocol { Rate = 11.1, RejectedFraction = 0.1, Session = 2400 } : null;
        LayeredSphere sphere = new("spheres: adult-4", new(0, -0.018, 0.005),
        [
            new("brain", 0.078, 0.33, 0.33), new("csf", 0.080, 1.79, 1.79), new("skull", 0.086, 0.0132, 0.0132), new("scalp", 0.092, 0.43, 0.43),
        ]);
        List<TargetChoice> targets = [new AmplitudeRatioChoice(Ratio)];
        if (o.Detection)
        {
            targets.Add(new DetectionChoice(0.01, 0.9, 1));
        }

        Response response = new()
        {
            Name = "wave V",
            Key = "responses.wave V",
            Regions = o.Regions,
            Moment = 3.5e-9,
            Band = new(100, 1500),
            Direction = new(o.Direction, o.Direction == DirectionName.Given ? new Vec3(0, 0, 1) : null),
        };
        Study study = new()
        {
            File = "default study",
            Folder = ".",
            Title = o.Title,
            Head = o.VoxelHead ? new VoxelHeadChoice { Labels = "head.nii.gz", Tissues = [new(1, "scalp", TissueKind.Scalp, 0.43), new(2, "skull", TissueKind.Skull, 0.01), new(3, "brain", TissueKind.Grey, 0.33)] } : o.ImportedHead ? new ImportedHeadChoice("eeg.npy", "meg.npy", "points.tsv", "rows.tsv") : new SphereHeadChoice(sphere, "adult-4", 1),
            Eeg = o.Eeg ? new EegChoice("ten-ten-64", null, null, new(ReferenceKind.Average, [])) : null,
            Derivations = o.Eeg ? ["Cz-mastoids"] : [],
            Meg = o.Meg ? new MegChoice(null, new("axial-gradiometer", 200, 0.06, 0.03, 0.17, -0.6)) : null,
            Responses = [response],
            Targets = targets,
            Protocol = protocol,
        };
        long? session = o.Session ? 23_976 : null;
        return new Assessment
        {
            Study = study,
            Version = "0.1.0",
            Inputs = [new("default study", "9f86d081884c7d659a2feaa0c55ad015a3bf4f1b2b0b822cd15d6c15b0f00a08")],
            Assumptions =
            [
                new("head.spheres.preset", "adult-4", "", true, "stated by the study", null),
                new("head.spheres.centre_mm", new double[] { 0, -18, 5 }, "mm", false, "fit to the inner skull of a real head", Grade.Derived),
                new("noise.meg_sensor_fT_per_rtHz", 5.0, "fT/sqrt(Hz)", false, "typical axial gradiometer", Grade.Memory),
                new("sensors.meg.sites", 200, "", true, "stated by the study", null),
                new("noise.brain", true, "", false, "on because eeg_total is given", Grade.Derived),
            ],
            Warnings = ["The sphere is worst at the low brainstem: results for inferior-colliculus-left carry its misfit of 5.5 mm."],
            Responses = [new(response, [.. o.Regions.Select((name, k) => Region(o, name, k, session, protocol))])],
            SessionTrials = session,
            Leadfields = o.VoxelHead ? new("EEG leadfield: rows", "MEG leadfield: rows", "finite elements on 400,000 voxels of 2 mm") : new("EEG leadfield: series", "MEG leadfield: closed form"),
            Limits = o.VoxelHead ? ["The head is made of voxels, here of 2 mm.", "MEG helmet: its sites lie 30.0 to 40.0 mm from the scalp (median 35.0 mm)."] : ["The head is a set of concentric spheres."],
            Scene = Scene(o),
        };
    }

    private static RegionResult Region(Options o, string name, int index, long? session, Protocol? protocol)
    {
        double factor = index == 0 ? 1 : 1 + 0.02 * index + (o.Regions.Count > 4 ? 0.6 * index : 0);
        List<MeasureResult> rows = [];
        List<VerdictResult> verdicts = [];
        foreach ((Modality modality, double trials, string measure) in Modalities(o))
        {
            foreach (DirectionName direction in Directions)
            {
                if (direction == DirectionName.Given && o.Direction != DirectionName.Given)
                {
                    continue;
                }

                double gain = direction switch { DirectionName.Best => 0.6, DirectionName.QuasiRadial => 1.4, DirectionName.Isotropic => 1.2, _ => 1.0 };
                bool silent = modality == Modality.Meg && direction == DirectionName.QuasiRadial && (o.MegSilent || o.Regions.Count <= 4);
                rows.Add(Row(o, modality, direction, measure, trials * factor * gain, silent, session, protocol));
                if (modality != Modality.Both)
                {
                    rows.Add(Row(o, modality, direction, Names.ChannelMean, trials * factor * gain * 3, silent, session, protocol));
                }
            }

            foreach (string rule in o.Detection ? new[] { "amplitude_ratio", "detection" } : ["amplitude_ratio"])
            {
                MeasureResult row = rows.First(r => r.Modality == modality && r.Direction == o.Direction && r.Measure == measure);
                long? count = row.Targets.First(t => t.Rule == rule).Trials.P50;
                verdicts.Add(new VerdictResult
                {
                    Modality = modality,
                    Rule = rule,
                    Measure = measure,
                    Direction = o.Direction,
                    Text = count is null ? "Silent: a sphere gives no field outside for this direction." : $"{Names.Of(modality)} needs {count} trials by {rule}.",
                    FitsSession = session is { } s ? count is { } n && n <= s : null,
                    Chain = Chain(modality, measure, count, protocol),
                    Power = rule == (o.Detection ? "detection" : "amplitude_ratio") && row.SnrDb is { P05: { } weak, P50: { } middle, P95: { } strong }
                        ? new(o.Test.Description, o.Detection, 0.9, Grows(o.Test, middle), Grows(o.Test, weak), Grows(o.Test, strong)) : null,
                });
            }
        }

        return new RegionResult
        {
            Region = name,
            Moment = 3.5e-9,
            Dipoles = 123 + index,
            Dropped = index,
            Spacing = 0.001,
            Volume = (123 + index) * 1e-9,
            Split = o.Meg ? new(new(1e-17, null, 2e-17, null, 4e-17), new(0.1, null, 0.2, null, 0.4), 0, 0) : null,
            FieldCaptured = o.Meg ? 0.72 : null,
            Results = rows,
            Verdicts = verdicts,
            Warnings = index == 0 ? [$"{name}: the field's maximum lies below the array's edge; the array captures 72 % of it."] : [],
        };
    }

    private static IEnumerable<(Modality Modality, double Trials, string Measure)> Modalities(Options o)
    {
        if (o.Eeg)
        {
            yield return (Modality.Eeg, o.EegTrials, "Cz-mastoids");
        }

        if (o.Meg)
        {
            yield return (Modality.Meg, o.MegTrials, Names.BestChannel);
        }

        if (o.Eeg && o.Meg)
        {
            yield return (Modality.Both, o.JointTrials, "both");
        }
    }

    private static MeasureResult Row(
        Options o, Modality modality, DirectionName direction, string measure, double trials, bool silent, long? session, Protocol? protocol)
    {
        string unit = modality == Modality.Eeg ? "uV" : "fT";
        double peak = modality == Modality.Eeg ? 0.2475 : 2.611;
        if (silent)
        {
            const string Reason = "silent: below the rounding of the strongest direction";
            return new(modality, direction, measure, null, new(null, null, null, null, null), Targets(o, null, session, protocol, Reason), Reason,
                new LeakResult(0.06, Snr(trials * 280), Targets(o, trials * 280, session, protocol, null)));
        }

        PeakAmplitude? amplitude = modality == Modality.Both ? null : new(peak, unit, modality == Modality.Eeg ? "Cz-mastoids" : "A117");
        return new(modality, direction, measure, amplitude, Snr(trials), Targets(o, trials, session, protocol, null, peak), null, null);
    }

    private static Func<double, double> Grows(ITargetRule test, double snrDb) => trials => test.Probability(Math.Pow(10, snrDb / 10), 0, trials)!.Value;

    private static Percentiles Snr(double trials)
    {
        double Db(double factor) => 10 * Math.Log10(Ratio * Ratio / (trials * factor - 0.5));
        return new(Db(1.22), Db(1.1), Db(1), Db(0.93), Db(0.83));
    }

    private static TargetResult[] Targets(Options o, double? trials, long? session, Protocol? protocol, string? reason, double? peak = null)
    {
        double[] factors = [0.83, 0.93, 1, 1.1, 1.22];
        List<TargetResult> results = [];
        foreach ((string rule, double scale) in o.Detection ? new[] { ("amplitude_ratio", 1.0), ("detection", 13.017 / 9) } : [("amplitude_ratio", 1.0)])
        {
            long?[] n = [.. factors.Select(f => trials is { } t ? (long?)Math.Ceiling(Math.Round(t * f * scale, 6)) : null)];
            double? Minutes(long? count) => count is { } c && protocol is { } p ? c / (60 * p.Rate * (1 - p.RejectedFraction)) : null;
            double? share = session is { } s && n[2] is { } median ? Math.Sqrt(median / (double)s) : null;
            results.Add(new(rule, new(n[0], n[1], n[2], n[3], n[4]),
                protocol is null ? null : new(Minutes(n[0]), Minutes(n[1]), Minutes(n[2]), Minutes(n[3]), Minutes(n[4])),
                3.5e-9 * share, peak * share, reason));
        }

        return [.. results];
    }

    private static DerivedNumber[] Chain(Modality modality, string measure, long? trials, Protocol? protocol)
    {
        string unit = modality == Modality.Eeg ? "uV" : "fT";
        List<DerivedNumber> chain =
        [
            new("q", "moment", 3.5, "nAm", "", "stated by the study", null),
            new("g", $"amplitude per moment at {measure}", 0.2475 / 3.5, $"{unit}/nAm", "", "layered sphere, series of Legendre polynomials", Grade.Derived),
            new("A", $"amplitude at {measure}", 0.2475, unit, "A = q g", "linear in the moment", Grade.Derived),
            new("s", "noise rms in one trial, 100 to 1500 Hz", 1.4360140000000001, unit, "", "eeg_total of the study", null),
            new("rho", "amplitude ratio wanted", Ratio, "", "", "stated by the study", null),
        ];
        if (trials is { } n)
        {
            chain.Add(new("N", "accepted trials", n, "trials", "N = ceil((rho s/A)^2)", "averaging of independent noise", Grade.Derived));
            if (protocol is { } p)
            {
                chain.Add(new("r", "accepted trials a minute", 60 * p.Rate * (1 - p.RejectedFraction), "1/min", "r = 60 rate (1 - rejected)", "stated by the study", null));
                chain.Add(new("T", "recording time", n / (60 * p.Rate * (1 - p.RejectedFraction)), "min", "T = N/r", "arithmetic", Grade.Derived));
            }
        }

        return [.. chain];
    }

    private static Scene Scene(Options o)
    {
        Vec3 centre = new(0, -0.018, 0.005);
        return new Scene
        {
            Centre = o.ImportedHead ? null : centre,
            Outlines = o.VoxelHead ? [.. Enumerable.Range(0, 3).SelectMany(axis => new[] { Outline("scalp", axis, 0.092), Outline("bone", axis, 0.086, 0.080), Outline("brain", axis, 0.078) })] : [],
            Cut = centre,
            Layers = o.ImportedHead || o.VoxelHead ? [] : [("brain", 0.078), ("csf", 0.080), ("skull", 0.086), ("scalp", 0.092)],
            Electrodes = o.Eeg ? [.. Enumerable.Range(0, 64).Select(k => ($"E{k}", centre + 0.092 * GoldenSpiral.Point(k, 64, -0.3)))] : [],
            CoilSites = o.Meg ? [.. Enumerable.Range(0, 200).Select(k => centre + 0.122 * GoldenSpiral.Point(k, 200, -0.3))] : [],
            Regions = [.. o.Regions.Select((name, k) => Region(name, Points(o, k), o.ImportedHead ? null : centre))],
        };
    }

    private static HeadOutline Outline(string surface, int axis, params double[] radii) => new(surface, axis,
    [
        .. radii.Select(r => (IReadOnlyList<Vec3>)[.. Enumerable.Range(0, 60).Select(k =>
        {
            (double u, double v) = (r * Math.Cos(k * Math.PI / 30), r * Math.Sin(k * Math.PI / 30));
            return new Vec3(0, -0.018, 0.005) + (axis switch { 0 => new Vec3(0, u, v), 1 => new Vec3(u, 0, v), _ => new Vec3(u, v, 0) });
        })]),
    ]);

    private static SceneRegion Region(string name, IReadOnlyList<Vec3> points, Vec3? centre) =>
        new(name, points, centre is { } c ? 0.092 - (points.Aggregate(Vec3.Zero, (a, b) => a + b) / points.Count - c).Norm : null);

    private static IReadOnlyList<Vec3> Points(Options o, int index)
    {
        Vec3 at = o.Regions.Count > 2
            ? new(0.03 * Math.Cos(index), -0.02 + 0.03 * Math.Sin(2.3 * index), 0.004 * index - 0.03)
            : new(index == 0 ? -0.006 : 0.006, -0.036, -0.011);
        return [.. Enumerable.Range(0, 60).Select(k => at + 0.0032 * Math.Cbrt((k + 1) / 60.0) * GoldenSpiral.Point(k, 60))];
    }

    /// <summary>A chunk of dipoles for the table.</summary>
    public static DipoleChunk Chunk(int count, int columns, int seed = 1)
    {
        Random random = new(seed);
        double[][] snr = [.. Enumerable.Range(0, columns).Select(_ => Enumerable.Range(0, count).Select(_ => -60 * random.NextDouble()).ToArray())];
        Vec3 Any() => new(random.NextDouble(), random.NextDouble(), random.NextDouble());
        return new DipoleChunk
        {
            Response = "wave V",
            Region = "thalamus-left",
            Count = count,
            Points = [.. Enumerable.Range(0, count).Select(k => $"p{k}")],
            Positions = [.. Enumerable.Range(0, count).Select(_ => Si.FromMm(1) * Any())],
            Directions = [.. Enumerable.Range(0, 3 * count).Select(_ => Any())],
            SingularValues = [.. Enumerable.Range(0, count).Select(_ => Any())],
            States = [.. Enumerable.Range(0, count).Select(_ => SplitState.Ok)],
            SnrDb = snr,
        };
    }
}
