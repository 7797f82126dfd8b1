using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Spheres;
using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Tests.Core.Leadfields;
using DeepSourceCheck.Tests.References;
using DeepSourceCheck.Tests.Support;

using MathNet.Numerics.LinearAlgebra;

namespace DeepSourceCheck.Tests.Core.Detection;

/// <summary>Filters that were built for a displaced place, another head and an estimated covariance.</summary>
public class RealisticFilterTests
{
    /// <summary>Products of matrices in another order.</summary>
    private const double Rounding = 1e-9;

    private const int Electrodes = 12, Coils = 15;

    private static readonly LayeredSphere Sphere = TestHeads.Adult, Thick = new("other", Sphere.Centre, [.. Sphere.Layers.Select(l => l.Tissue == "skull" ? l with { RadialConductivity = 0.33 / 80, TangentialConductivity = 0.33 / 80 } : l)]);

    private static readonly Vec3[] Places = [.. Enumerable.Range(0, 8).Select(k => Sphere.Centre + (0.02 + 0.005 * k) * GoldenSpiral.Point(k, 8))];

    private static readonly Electrode[] Sites = SphereLeadfields.Electrodes(Sphere, Electrodes);

    private static readonly MegChannel[] Array = [.. SphereLeadfields.Coils(Sphere, 40).Where(c => c.Kind == CoilKind.AxialGradiometer).Take(Coils)];

    private static (BlockSignals Signals, SignalSpace Space, NoiseCovariance Noise) Load(double placeError, LayeredSphere built, int draw, double? samples = null)
    {
        var random = new Random(3);
        var noise = new NoiseCovariance
        {
            EegRows = Electrodes,
            MegRows = Coils,
            Eeg = SmallStudy.RandomCovariance(random, Electrodes, 1e-6),
            Meg = SmallStudy.RandomCovariance(random, Coils, 1e-13),
        };
        var space = new SignalSpace(noise, ChannelOperator.Reference([.. Sites.Select(s => s.Name)], [.. Enumerable.Repeat(1.0 / Electrodes, Electrodes)]), null, Array);
        var source = new SphereLeadfield(Sphere, Sites, Array);
        var errors = new FilterErrors(placeError, [new SphereLeadfield(built, Sites, Array)], space, samples, samples, null);
        var block = new LeadfieldBlock(Electrodes, Coils);
        var signals = new BlockSignals(space, Sphere, true);
        signals.Build(errors);
        block.Load(Places, default);
        source.Fill(block);
        signals.Load(block);
        signals.Misbuilt!.Load(block, draw);
        return (signals, space, noise);
    }

    public static TheoryData<Modality> Modalities => [Modality.Eeg, Modality.Meg, Modality.Both];

    [Theory]
    [MemberData(nameof(Modalities))]
    public void FilterWithoutErrors_IsTheMatchedFilter(Modality modality)
    {
        (BlockSignals signals, _, _) = Load(0, Sphere, 3);
        foreach (DirectionMode mode in new[] { DirectionMode.OfSet, DirectionMode.Best })
        {
            signals.Ask(mode, LaneDirection.Same(new Vec3(1, 2, -1).Unit()));
            Vector512<double> matched = signals.MatchedFilter(modality), realistic = signals.RealisticFilter(modality);
            for (int lane = 0; lane < LeadfieldBlock.Lanes; lane++)
            {
                // The pattern search ends 1e-5 rad beside the best direction, where power falls with the square.
                RelativeAssert.Equal(matched[lane], realistic[lane], mode == DirectionMode.Best ? 1e-7 : Rounding);
            }
        }
    }

    [Theory]
    [MemberData(nameof(Modalities))]
    public void WrongFilter_IsNeverBetterThanTheMatchedOne(Modality modality)
    {
        for (int draw = 0; draw < FilterErrors.Draws; draw++)
        {
            (BlockSignals signals, _, _) = Load(0.008, Thick, draw, 60);
            foreach (DirectionMode mode in new[] { DirectionMode.OfSet, DirectionMode.Best })
            {
                signals.Ask(mode, LaneDirection.Same(new Vec3(1, 2, -1).Unit()));
                Vector512<double> matched = signals.MatchedFilter(modality), realistic = signals.RealisticFilter(modality);
                for (int lane = 0; lane < LeadfieldBlock.Lanes; lane++)
                {
                    Assert.True(realistic[lane] <= matched[lane] * (1 + Rounding) && realistic[lane] > 0);
                }
            }
        }
    }

    [Theory]
    [InlineData(Modality.Eeg, 0)]
    [InlineData(Modality.Eeg, 17)]
    [InlineData(Modality.Meg, 5)]
    [InlineData(Modality.Both, 9)]
    public void WrongFilter_EqualsTheSlowTwin(Modality modality, int draw)
    {
        (BlockSignals signals, SignalSpace space, NoiseCovariance noise) = Load(0.006, Thick, draw);
        Vec3 u = new Vec3(0.3, -1, 0.5).Unit();
        signals.Ask(DirectionMode.OfSet, LaneDirection.Same(u));
        Vector512<double> found = signals.RealisticFilter(modality);
        var errors = new FilterErrors(0.006, [new SphereLeadfield(Thick, Sites, Array)], space, null, null, null);
        Vec3[] displaced = [.. Places.Select(p => p + errors.Displacements[draw])];
        Assert.All(displaced, p => Assert.Null(Sphere.WhyRefused(p)));
        (double[][] eeg, double[][] meg) = SphereLeadfields.Compute(Sphere, Places, Sites, Array);
        (double[][] eegWrong, double[][] megWrong) = SphereLeadfields.Compute(Thick, displaced, Sites, Array);
        Matrix<double> c = Covariance(noise, modality);
        for (int lane = 0; lane < LeadfieldBlock.Lanes; lane++)
        {
            Vector<double> b = Field(eeg[lane], meg[lane], u, modality), wrong = Field(eegWrong[lane], megWrong[lane], u, modality), w = c.Solve(wrong);
            double signal = w * b;
            RelativeAssert.Equal(signal * signal / (w * (c * w)), found[lane], 1e-7);
        }
    }

    // Electrodes against the last one: a basis of the reference's range; rows in units near their noise.
    private static Vector<double> Field(double[] eeg, double[] meg, Vec3 u, Modality modality)
    {
        double Row(double[] rows, int k) => rows[3 * k] * u.X + rows[3 * k + 1] * u.Y + rows[3 * k + 2] * u.Z;
        IEnumerable<double> e = Enumerable.Range(0, Electrodes - 1).Select(k => 1e6 * (Row(eeg, k) - Row(eeg, Electrodes - 1))), m = Enumerable.Range(0, Coils).Select(k => 1e13 * Row(meg, k));
        return Vector<double>.Build.DenseOfEnumerable(modality switch { Modality.Eeg => e, Modality.Meg => m, _ => e.Concat(m) });
    }

    private static Matrix<double> Covariance(NoiseCovariance noise, Modality modality)
    {
        Matrix<double> all = PlainMeasures.Square(noise.Eeg);
        Matrix<double> against = Matrix<double>.Build.Dense(Electrodes - 1, Electrodes, (i, j) => i == j ? 1 : j == Electrodes - 1 ? -1 : 0);
        Matrix<double> e = 1e12 * against * all * against.Transpose(), m = 1e26 * PlainMeasures.Square(noise.Meg);
        return modality switch { Modality.Eeg => e, Modality.Meg => m, _ => e.DiagonalStack(m) };
    }

    [Fact]
    public void EstimatedCovariances_KeepThePublishedShareOfThePower()
    {
        // Mean of (y'x)^2/(y'y x'x), y = S^-1 x, over draws of S: (nu - p + 2)/(nu + 1) (Reed, Mallett and Brennan 1974); 4000 draws of a beta variable: 5 standard errors.
        const int order = 6;
        const double samples = 20;
        double expected = (samples - order + 2) / (samples + 1), sum = 0, squares = 0;
        const int draws = 4000;
        for (int k = 0; k < draws; k++)
        {
            double[] inverse = EstimatedWhitening.Inverse(order, samples, (ulong)k + 77);
            double own = inverse[0], norm = Enumerable.Range(0, order).Sum(i => inverse[i * order] * inverse[i * order]), kept = own * own / norm;
            sum += kept;
            squares += kept * kept;
        }

        double mean = sum / draws, error = Math.Sqrt((squares / draws - mean * mean) / draws);
        Assert.InRange(mean, expected - 5 * error, expected + 5 * error);
        Assert.True(error < 0.005);
    }

    [Fact]
    public void Displacements_AreNormalAboutTheirPlace()
    {
        (_, SignalSpace space, _) = Load(0, Sphere, 0);
        var errors = new FilterErrors(0.005, [new SphereLeadfield(Sphere, Sites, Array)], space, null, null, null);
        double[] squares = [.. new Func<Vec3, double>[] { d => d.X, d => d.Y, d => d.Z }.Select(axis => errors.Displacements.Average(d => axis(d) * axis(d)))];
        // 32 quantiles stop short of the tails: the mean square of a chi distribution with 3 degrees of freedom comes out 1.6 % low, and lengths meet directions unevenly.
        Assert.All(squares, s => Assert.InRange(Math.Sqrt(s), 0.0040, 0.0060));
        RelativeAssert.Equal(0.005, Math.Sqrt(squares.Sum() / 3), 0.02);
    }

    [Fact]
    public void Place_ThatTheHeadRefuses_MovesTheOtherWayOrLess()
    {
        (_, SignalSpace space, _) = Load(0, Sphere, 0);
        var errors = new FilterErrors(0.05, [new SphereLeadfield(Sphere, Sites, Array)], space, null, null, null);
        Vec3 near = Sphere.Centre + new Vec3(0, 0, 0.07);
        Assert.All(Enumerable.Range(0, FilterErrors.Draws), draw => Assert.Null(Sphere.WhyRefused(errors.Place(near, draw, Sphere))));
    }
}
