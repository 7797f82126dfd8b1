using System.Buffers;
using System.Globalization;

using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Planning.Unknowns;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Planning;

/// <summary>The main job on a study whose parts are built: every response, every region.</summary>
public static class Assessor
{
    /// <summary>A region whose captured share is below this says so.</summary>
    private const double CapturedEnough = 0.98;

    /// <summary>A cancellation below this is not worth a warning [dB].</summary>
    private const double LittleCancelled = 1;

    /// <summary>Above this angle v3 is not called quasi-radial but least visible.</summary>
    private const double LeastVisibleDeg = 25;

    /// <summary>Computes all results.</summary>
    /// <param name="setup">The study.</param>
    /// <param name="sink">Takes dipole results as they come, or null.</param>
    /// <param name="progress">(stage, fraction 0 to 1), or null.</param>
    /// <param name="cancellation">Stops between chunks of dipoles.</param>
    public static IReadOnlyList<ResponseResult> Assess(StudySetup setup, IDipoleSink? sink, Action<string, double>? progress, CancellationToken cancellation)
    {
        long total = setup.Study.Responses.Sum(r => r.Together ? r.Regions.Count : r.Regions.Sum(name => (long)setup.Region(name).Positions.Length));
        long done = 0;
        var results = new List<ResponseResult>();
        bool begun = false;
        foreach (Response response in setup.Study.Responses)
        {
            progress?.Invoke($"noise of {response.Name}", (double)done / total);
            var plans = new PlanSet(setup, response);
            EvaluationPlan plan = plans.Peak(response);
            if (!begun)
            {
                sink?.Begin(AllColumns(setup, plans.Space));
                begun = true;
            }

            CompetitorReport? competitors = response.Competitors.Count == 0 ? null : new CompetitorReport(setup, response, plans.Space, cancellation);
            var regions = new List<RegionResult>();
            foreach ((FilledRegion region, ILeadfieldSource source, IReadOnlyList<FilledRegion> parts) in Sources(setup, response, cancellation))
            {
                long before = done;
                StudySetup own = source is SummedSource ? setup with { Head = new SummedHead(setup.Head) } : setup;
                EvaluationPlan asked = response.Amplitude is null ? plan
                    : plans.Peak(response with { Moment = MomentFromAmplitude.Find(plan, own.Head, source, region, cancellation) });
                List<(EvaluationPlan Plan, RegionTally Tally)> read = Read(plans, asked, own.Head, source, region, Adapt(sink, asked, setup, plans.Space),
                    n => progress?.Invoke($"{response.Name}: {region.Name}", (double)(before + n) / total), cancellation);
                done += region.Positions.Length;
                RemovalLoss? loss = setup.Removal is null || !setup.MegReported ? null
                    : new RemovalReport(own, asked).Of(region, source, source is SummedSource ? new SummedSource(setup.Removal.Source, parts, Activation.Weights(response), cancellation) : setup.Removal.Source, cancellation);
                RegionResult result = Result(own, read, region, source, parts, loss, cancellation);
                result = result with
                {
                    Competitors = competitors?.Of(read[0].Plan, own, region, source, result.Results, cancellation),
                    Location = new LocationReport(own, read[0].Plan).Of(region, source, cancellation),
                    Electrodes = response.ChooseSensors ? new ElectrodeReport(own, read[0].Plan, setup.Noise!.Of(response)).Of(region, source, cancellation) : null,
                };
                EvaluationPlan? matched = read.Select(r => r.Plan).FirstOrDefault(p => p.IsSpectral && p.View.Errors is null);
                regions.Add(setup.Study.Unknowns is null ? result : Unsure(result, new UnknownsRun(own, read[0].Plan, own.Head, source, region, parts, matched).Run(cancellation)));
            }

            results.Add(new ResponseResult(response, regions) { SessionTrials = plan.SessionTrials, Waveform = plans.Waveform, Spectra = regions.Count > 0 ? new SpectrumReader(setup, plan).Of(regions[0]) : [], Recording = setup.Noise!.Recorded(response.Band) });
        }

        return results;
    }

    private static RegionResult Unsure(RegionResult result, UnknownsResult unknowns) => result with
    {
        Unknowns = unknowns,
        Verdicts = [.. result.Verdicts.Zip(unknowns.Verdicts, (verdict, spread) => verdict with { Assurance = spread.Assurance is { } a ? Math.Round(20 * a) / 20 : null })],
    };

    private static EvaluationPlan Plan(StudySetup setup, Response response, SignalSpace space) =>
        new(response, space, setup.Study.Targets, setup.Study.Protocol, setup.MegReported, setup.MegNames.Count > 0)
        {
            WeightingGain = setup.Study.Noise?.SpreadBetweenTrials is { } spread ? Math.Exp(4 * spread * spread) : null,
        };

    private static IEnumerable<(FilledRegion Region, ILeadfieldSource Source, IReadOnlyList<FilledRegion> Parts)> Sources(
        StudySetup setup, Response response, CancellationToken cancellation)
    {
        FilledRegion[] regions = [.. response.Regions.Select(setup.Region)];
        if (response.Together)
        {
            var summed = new SummedSource(setup.Source, regions, Activation.Weights(response), cancellation);
            yield return (summed.Region, summed, regions);
            yield break;
        }

        foreach (FilledRegion region in regions)
        {
            yield return (region, setup.Source, [region]);
        }
    }

    // Responses may differ in whether a direction is given and what the joint reading is named: dipoles.csv has one header, so it lists the union.
    private static IReadOnlyList<DipoleColumn> AllColumns(StudySetup setup, SignalSpace space) =>
        [.. setup.Study.Responses
            .SelectMany(r => Plan(setup, r, space).Columns)
            .Distinct().OrderBy(c => c.Modality)];

    private static IDipoleSink? Adapt(IDipoleSink? sink, EvaluationPlan plan, StudySetup setup, SignalSpace space)
    {
        if (sink is null)
        {
            return null;
        }

        IReadOnlyList<DipoleColumn> all = AllColumns(setup, space), own = plan.Columns;
        return all.SequenceEqual(own) ? sink : new ColumnAdapter(sink, [.. all.Select(c => own.ToList().IndexOf(c))]);
    }

    private static RegionResult Result(
        StudySetup setup, List<(EvaluationPlan Plan, RegionTally Tally)> read, FilledRegion region, ILeadfieldSource source, IReadOnlyList<FilledRegion> parts,
        RemovalLoss? loss, CancellationToken cancellation)
    {
        (EvaluationPlan plan, RegionTally tally) = read[0];
        RegionReport[] reports = [.. read.Select(r => Report(setup, r.Plan, r.Tally))];
        IReadOnlyList<MeasureResult> rows = RowMerge.Of([.. read.Select((r, k) => (r.Plan, reports[k].Rows()))]);
        RegionReport report = reports[0];
        SplitSummary? split = report.Split();
        SupportCounts?[] supports = [.. parts.Select(p => setup.Source.Supports(p.Positions, cancellation))];
        IReadOnlyList<CancellationResult> lost = source is SummedSource summed ? FieldCancellation.Of(plan, setup, summed, parts, cancellation) : [];
        double?[] captured = [.. parts.Select(setup.FieldCaptured)];
        var written = new List<VerdictResult>();
        foreach ((EvaluationPlan own, RegionTally found) in read)
        {
            written.AddRange(new VerdictWriter(setup, own, region, source, found).Write(ref rows, cancellation));
        }

        List<string> rules = [.. plan.Targets.Select(t => Names.Of(t))];
        VerdictResult[] verdicts = [.. written.OrderBy(v => v.Modality).ThenBy(v => rules.IndexOf(v.Rule))];
        return new RegionResult
        {
            Region = region.Name,
            Moment = plan.Response.Moment,
            Cancellation = lost,
            Dipoles = parts.Sum(p => p.Positions.Length),
            Dropped = parts.Sum(p => p.Dropped.Count),
            Spacing = parts.Select(p => p.Spacing).Distinct().Count() == 1 ? parts[0].Spacing : null,
            Volume = parts.All(p => p.Volume is not null) ? parts.Sum(p => p.Volume) : null,
            Split = split,
            FieldCaptured = captured.Min(),
            Profile = tally.Profile?.Profile(),
            Removal = loss,
            Supports = supports.Aggregate((a, b) => a is null || b is null ? null : a + b),
            Results = rows,
            Verdicts = verdicts,
            RealisticHeads = [.. parts.Select(p => p.RealisticHead).OfType<RealisticHeadEffect>()],
            Warnings = [.. parts.SelectMany(p => p.Warnings).Distinct(), .. Warnings(plan, parts, captured, split),
                .. Fallbacks(parts, supports), .. CentreWarnings(setup, plan, parts), .. Cancelled(plan.Response, parts, lost),
                .. loss is null ? Array.Empty<string>() : [RemovalReport.Words(region.Name, loss)]],
        };
    }

    private static List<(EvaluationPlan Plan, RegionTally Tally)> Read(
        PlanSet plans, EvaluationPlan peak, IHead head, ILeadfieldSource source, FilledRegion region, IDipoleSink? sink, Action<long>? progress, CancellationToken cancellation)
    {
        RegionTally tally = new RegionRun(peak, head, source).Run(region, sink, progress, cancellation);
        double window = double.NaN;
        if (peak.StandsOnWindow)
        {
            window = WindowRatio.Of(peak, tally);
            peak = peak.WithWindow(window);
            // Under an artefact percentiles run over figures that already hold the ratio.
            tally = peak.HasArtefact(Modality.Both) ? new RegionRun(peak, head, source).Run(region, null, null, cancellation) : tally;
        }

        var read = new List<(EvaluationPlan Plan, RegionTally Tally)> { (peak, tally) };
        foreach (EvaluationPlan other in plans.Others(peak))
        {
            EvaluationPlan own = peak.StandsOnWindow ? other.WithWindow(window) : other;
            read.Add((own, new RegionRun(own, head, source).Run(region, null, null, cancellation)));
        }

        return read;
    }

    private static RegionReport Report(StudySetup setup, EvaluationPlan plan, RegionTally tally)
    {
        var signals = new BlockSignals(plan.Space, setup.Head, plan.MegReported);
        return new RegionReport(plan, tally, signals.MegPeakIsPlanar, signals.PeakChannelName);
    }

    private static IEnumerable<string> Warnings(EvaluationPlan plan, IReadOnlyList<FilledRegion> parts, double?[] captured, SplitSummary? split)
    {
        for (int k = 0; plan.MegReported && k < parts.Count; k++)
        {
            if (captured[k] is { } share && share < CapturedEnough)
            {
                yield return string.Create(CultureInfo.InvariantCulture,
                    $"{parts[k].Name}: its field maximum lies outside the array's cap, which captures {share * 100:0} % of the largest field around the head");
            }
        }

        string name = string.Join(" + ", parts.Select(p => p.Name));
        if (split is { UndefinedDipoles: > 0 })
        {
            yield return string.Create(CultureInfo.InvariantCulture,
                $"{name}: at {split.UndefinedDipoles} of its dipoles MEG sees nothing and directions are undefined: they lie at the centre of a spherical head, or summed fields cancel");
        }

        if (split is { DegenerateDipoles: > 0 })
        {
            yield return string.Create(CultureInfo.InvariantCulture,
                $"{name}: at {split.DegenerateDipoles} of its dipoles two singular values coincide, so that their directions are arbitrary in their plane");
        }

        if (split?.AngleToRadialDeg.P50 is { } angle && angle > LeastVisibleDeg)
        {
            yield return string.Create(CultureInfo.InvariantCulture,
                $"{name}: the direction that the array sees least stands {angle:0} degrees from the outward direction; read quasi-radial as least visible (partial coverage, a source near the centre, or one that lies nearer to the base of a real skull than to its vault)");
        }
    }

    private static IEnumerable<string> Cancelled(Response response, IReadOnlyList<FilledRegion> parts, IReadOnlyList<CancellationResult> lost)
    {
        if (lost.Any(l => l.Db < -LittleCancelled))
        {
            string figures = string.Join(", ", lost.Select(l => string.Create(CultureInfo.InvariantCulture,
                $"{Names.Of(l.Modality)} {(double.IsFinite(l.Db) ? $"{Math.Round(-l.Db, 1) + 0.0:0.0} dB" : "everything")} ({l.Measure})")));
            yield return $"{response.Name}, {string.Join(" + ", parts.Select(p => p.Name))}: the regions act together and their fields oppose each other; that costs {figures} against the same moments with fields alike and in step";
        }
    }

    private static IEnumerable<string> Fallbacks(IReadOnlyList<FilledRegion> parts, IReadOnlyList<SupportCounts?> supports) =>
        parts.Zip(supports).Where(p => p.Second?.Warning is not null).Select(p => $"{p.First.Name}: {p.Second!.Warning}");

    private static IEnumerable<string> CentreWarnings(StudySetup setup, EvaluationPlan plan, IReadOnlyList<FilledRegion> parts)
    {
        foreach (FilledRegion region in parts.Where(_ => plan.MegReported))
        {
            if (setup.CentreSensitivity(region, plan.Space.MegSd) is not { } found)
            {
                continue;
            }

            // Whole decibels: the misfit of a sphere is no better known.
            string ranges = found.Ranges.Count == 0 ? "that is off makes something of nothing" : string.Join(", ", found.Ranges.Select((r, k) => string.Create(
                CultureInfo.InvariantCulture, $"{(k == 0 ? "off by" : "by")} {Si.ToMm(r.Shift):0} mm{(k == 0 ? " changes its MEG power by" : "")} {Change(r.LowestDb)} to {Change(r.HighestDb)} dB")));
            yield return string.Create(CultureInfo.InvariantCulture,
                $"{region.Name}: {Si.ToMm(found.Distance):0} mm from the sphere's centre, where MEG vanishes; a centre {ranges} (best channel, strongest tangential direction)");
        }

        static string Change(double db) => db < -60 ? "minus infinity" : string.Create(CultureInfo.InvariantCulture, $"{db:+0;-0;0}");
    }

    private sealed class ColumnAdapter(IDipoleSink inner, int[] own) : IDipoleSink
    {
        public void Begin(IReadOnlyList<DipoleColumn> columns) => inner.Begin(columns);

        public void Format(DipoleChunk chunk, IBufferWriter<byte> text)
        {
            double[] absent = [.. Enumerable.Repeat(double.NaN, chunk.Count)];
            inner.Format(new DipoleChunk
            {
                Response = chunk.Response,
                Region = chunk.Region,
                Count = chunk.Count,
                Points = chunk.Points,
                Positions = chunk.Positions,
                Directions = chunk.Directions,
                SingularValues = chunk.SingularValues,
                States = chunk.States,
                SnrDb = [.. own.Select(k => k < 0 ? absent : chunk.SnrDb[k])],
            }, text);
        }

        public void Append(ReadOnlySpan<byte> formatted) => inner.Append(formatted);
    }
}
