using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Planning;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Tests.References;
using DeepSourceCheck.Tests.Support;

using MathNet.Numerics.LinearAlgebra;

namespace DeepSourceCheck.Tests.Core.Planning;

/// <summary>The cortical comparison on arrays: each point along its own normal, binned by depth and angle, against plain sums.</summary>
public class ProfileTallyTests
{
    private const int Points = 403;          // no multiple of eight: the last block is not full

    // dB of the same powers by another order of summation.
    private const double Db = 1e-9;

    private static readonly SmallStudy Study = Make();

    private static SmallStudy Make()
    {
        var random = new Random(11);
        Vec3 Direction() => new Vec3(random.NextDouble() - 0.5, random.NextDouble() - 0.5, random.NextDouble() - 0.5).Unit();
        return new SmallStudy
        {
            Eeg = SmallStudy.Random(random, Points, 9, 100),
            Meg = SmallStudy.Random(random, Points, 12, 1e-6),
            EegCovariance = SmallStudy.RandomCovariance(random, 9, 1e-6),
            MegCovariance = SmallStudy.RandomCovariance(random, 12, 1e-13),
            CorticalPlaces = [.. Enumerable.Range(0, Points).Select(k => k % 50 == 7 ? (CorticalPlace?)null : new(0.0299 * random.NextDouble(), Direction(), Math.PI / 2 * random.NextDouble()))],
        };
    }

    [Fact]
    public void Bins_HoldThePercentilesOfThePlainMeasures()
    {
        CorticalProfile profile = Study.Assess().Profile!;
        Assert.Equal(Study.CorticalPlaces!.Count(p => p is null), profile.WithoutNormal);
        Check(profile.ByDepth, 6, p => p.Depth, _ => true);
        Check(profile.UprightByDepth, 6, p => p.Depth, p => p.SourceAngle >= Math.PI / 3);
        Check(profile.ByAngle, 6, p => p.SourceAngle, _ => true);
        Assert.Equal(0.005, profile.ByDepth[0].To, 1e-15);
        Assert.Equal(Math.PI / 12, profile.ByAngle[0].To, 1e-15);
    }

    [Fact]
    public void RegionWithoutCorticalPlaces_HasNoProfile() => Assert.Null((Study with { CorticalPlaces = null }).Assess().Profile);

    [Fact]
    public void MegAlone_HasMegFiguresAlone()
    {
        CorticalProfile profile = (Study with { Eeg = [] }).Assess().Profile!;
        Assert.All(profile.ByDepth.SelectMany(b => b.Figures), f => Assert.Equal(Modality.Meg, f.Modality));
    }

    [Fact]
    public void TurnedNormals_ChangeNothing()
    {
        SmallStudy turned = Study with { CorticalPlaces = [.. Study.CorticalPlaces!.Select(p => p is { } q ? q with { Normal = -q.Normal } : p)] };
        Assert.Equal(Flat(Study.Assess().Profile!), Flat(turned.Assess().Profile!));
    }

    [Fact]
    public void Tallies_MergedInAnyParts_AreTheSame()
    {
        StudySetup setup = Study.Setup();
        FilledRegion region = setup.Regions[0];
        var space = new SignalSpace(setup.Noise!.InBand(1, 100), setup.Reference, setup.Derivations, setup.MegNames, setup.MegKinds);
        var plan = new EvaluationPlan(setup.Study.Responses[0], space, setup.Study.Targets, null, true, true);
        double?[] whole = Flat(Read(plan, setup, region, _ => 0, 1)), three = Flat(Read(plan, setup, region, block => block % 3, 3)), backwards = Flat(Read(plan, setup, region, block => 2 - block % 3, 3));
        Assert.Equal(whole, three);
        Assert.Equal(whole, backwards);
    }

    private static CorticalProfile Read(EvaluationPlan plan, StudySetup setup, FilledRegion region, Func<int, int> worker, int workers)
    {
        ProfileTally[] tallies = [.. Enumerable.Range(0, workers).Select(_ => new ProfileTally(plan, Points))];
        var block = new LeadfieldBlock(setup.Source.EegRows, setup.Source.MegRows);
        var signals = new BlockSignals(plan.Space, new ImportedHead(), true);
        for (int from = 0; from < Points; from += LeadfieldBlock.Lanes)
        {
            int n = Math.Min(LeadfieldBlock.Lanes, Points - from);
            block.Load(region.Positions.AsSpan(from, n), region.SourceIndices.AsSpan(from, n));
            setup.Source.Fill(block);
            signals.Load(block);
            tallies[worker(from / LeadfieldBlock.Lanes)].Read(signals, region.CorticalPlaces.AsSpan(from, n));
        }

        foreach (ProfileTally other in tallies.Skip(1))
        {
            tallies[0].Merge(other);
        }

        return tallies[0].Profile();
    }

    private static double?[] Flat(CorticalProfile profile) =>
        [.. profile.ByDepth.Concat(profile.ByAngle).Concat(profile.UprightByDepth).SelectMany(b => b.Figures.SelectMany(f => new[] { b.Points, f.SnrDb.P25, f.SnrDb.P50, f.SnrDb.P75 }))];

    private static void Check(IReadOnlyList<ProfileBin> bins, int expected, Func<CorticalPlace, double> value, Func<CorticalPlace, bool> counts)
    {
        Assert.Equal(expected, bins.Count);
        Matrix<double> reference = PlainMeasures.Referencing([.. Enumerable.Repeat(1.0 / 9, 9)]);
        Matrix<double> eegNoise = reference * PlainMeasures.Square(Study.EegCovariance!) * reference.Transpose(), megNoise = PlainMeasures.Square(Study.MegCovariance!);
        foreach (ProfileBin bin in bins)
        {
            int[] points = [.. Enumerable.Range(0, Points).Where(k => Study.CorticalPlaces![k] is { } p && counts(p) && value(p) >= bin.From && value(p) < bin.To)];
            Assert.Equal(points.Length, bin.Points);
            foreach (ProfileFigure figure in bin.Figures)
            {
                bool eeg = figure.Modality == Modality.Eeg;
                double[] powers = [.. points.Select(k =>
                {
                    Vector<double> b = PlainMeasures.Project((eeg ? Study.Eeg : Study.Meg)[k], Study.CorticalPlaces![k]!.Value.Normal);
                    b = eeg ? reference * b : b;
                    return figure.Measure == Names.ChannelMean
                        ? PlainMeasures.ChannelMean(b, eeg ? eegNoise : megNoise, Study.Moment) : PlainMeasures.BestChannel(b, eeg ? eegNoise : megNoise, Study.Moment);
                }).Order()];
                Assert.Equal(Quantile(powers, 0.25), figure.SnrDb.P25!.Value, Db);
                Assert.Equal(Quantile(powers, 0.5), figure.SnrDb.P50!.Value, Db);
                Assert.Equal(Quantile(powers, 0.75), figure.SnrDb.P75!.Value, Db);
            }

            Assert.Equal(4, bin.Figures.Count);
        }
    }

    private static double Quantile(double[] sorted, double share)
    {
        double at = share * (sorted.Length - 1);
        int below = (int)at;
        double low = 10 * Math.Log10(sorted[below]), high = 10 * Math.Log10(sorted[Math.Min(below + 1, sorted.Length - 1)]);
        return low + (at - below) * (high - low);
    }
}
