using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Spheres;
using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.References;
using DeepSourceCheck.Tests.Support;

using MathNet.Numerics.LinearAlgebra;

namespace DeepSourceCheck.Tests.Core.Noise;

/// <summary>The room's spatial terms, and their removal.</summary>
public class EnvironmentTests
{
    // Sums of some hundred terms.
    private const double Rounding = 1e-12;

    // Inverses of covariances of correlated channels: condition some 1e4.
    private const double FilterRounding = 1e-9;

    private static readonly Vec3 Centre = new(0, -0.018, 0.005);

    private static MegChannel[] Array(string coil, int sites) =>
        CoilArray.Generate(new(coil, sites, coil == "planar-gradiometer" ? 0.015 : 0.06, 0.025, CoilArray.DefaultEdgeFront, CoilArray.DefaultEdgeBack), Centre, 0.092);

    private static MegChannel[] Mixed() => [.. Array("magnetometer", 30), .. Array("planar-gradiometer", 20).Select(c => c with { Name = "P" + c.Name })];

    private static double[] Densities(IEnumerable<MegChannel> channels) => [.. channels.Select(c => c.Kind == CoilKind.PlanarGradiometer ? 3e-13 : 3e-15)];

    [Fact]
    public void HomogeneousField_ThroughAnIdealGradiometer_IsZero()
    {
        MegChannel[] channels = [.. Array("axial-gradiometer", 40), .. Array("planar-gradiometer", 10)];
        double[] pattern = EnvironmentNoise.Pattern(channels);
        for (int k = 0; k < channels.Length; k++)
        {
            Assert.All(Enumerable.Range(0, 3), t => Assert.Equal(0.0, pattern[k * EnvironmentNoise.Terms + t], 0.0));
            Assert.Contains(Enumerable.Range(3, 5), t => pattern[k * EnvironmentNoise.Terms + t] != 0);
        }
    }

    [Fact]
    public void EveryTerm_HasNeitherDivergenceNorCurl()
    {
        // A magnetic field without currents nearby. Fields of first degree: differences are exact.
        const double h = 0.01;
        for (int t = 0; t < EnvironmentNoise.Terms; t++)
        {
            Vec3 D(Vec3 e) => (EnvironmentNoise.Field(t, new Vec3(0.03, -0.02, 0.05) + h * e, 0.1) - EnvironmentNoise.Field(t, new Vec3(0.03, -0.02, 0.05) - h * e, 0.1)) / (2 * h);
            Vec3 dx = D(new(1, 0, 0)), dy = D(new(0, 1, 0)), dz = D(new(0, 0, 1));
            Assert.Equal(0, dx.X + dy.Y + dz.Z, Rounding);
            Assert.True(new Vec3(dy.Z - dz.Y, dz.X - dx.Z, dx.Y - dy.X).Norm < Rounding, $"term {t}");
        }
    }

    [Fact]
    public void Magnetometer_InTheMiddle_ReadsTheStatedDensity_WhicheverWayItPoints()
    {
        Vec3 axis = new Vec3(0.3, -0.5, 0.8).Unit();
        MegChannel[] channels = [new("a", CoilKind.Magnetometer, [new(new(0.01, 0.02, 0.03), axis, 1)])];
        var noise = new EnvironmentNoise(channels, 3e-15, corner: 0);
        NoiseModel model = new() { EegRows = 0, MegRows = 1, Terms = [noise] };
        RelativeAssert.Equal(9e-30 * 39, model.InBand(1, 40).Meg[0], Rounding);
        RelativeAssert.Equal(9e-30 * (39 + 5 * Math.Log(40)), (model.Unprojected(new EnvironmentNoise(channels, 3e-15, 5)).InBand(1, 40).Meg[0] - 9e-30 * 39), Rounding, "with a corner of 5 Hz");
    }

    [Fact]
    public void Gradients_OverTheSphereOfTheArraysRadius_HaveAQuarterOfTheAmplitude()
    {
        // By hand: |(y,x,0)|^2 over a sphere of radius R averages 2/3 R^2, and so do the other four; a third of it an axis: 5 x 2/9 = 10/9 of q^2, and q^2 = 0.9/16.
        const int points = 2000;
        double sum = 0;
        for (int k = 0; k < points; k++)
        {
            double z = 1 - (2 * k + 1) / (double)points, angle = k * Math.PI * (3 - Math.Sqrt(5)), across = Math.Sqrt(1 - z * z);
            Vec3 r = 0.11 * new Vec3(across * Math.Cos(angle), across * Math.Sin(angle), z);
            sum += Enumerable.Range(3, 5).Sum(t => Math.Pow(EnvironmentNoise.Field(t, r, 0.11).Norm, 2)) / 3;
        }

        RelativeAssert.Equal(1.0 / 16, sum / points, 1e-6, "points of a spiral instead of an integral");
    }

    [Fact]
    public void PlanarGradiometer_ReadsTheGradient_WhateverItsBaseline()
    {
        // Term (z, 0, x) q/R: the z component grows along x by q/R, q = sqrt(0.9)/4.
        double radius = 0.1;
        foreach (double baseline in new[] { 0.01, 0.03 })
        {
            MegChannel planar = new("p", CoilKind.PlanarGradiometer,
                [new(new(baseline / 2, 0, radius), new(0, 0, 1), 1 / baseline), new(new(-baseline / 2, 0, radius), new(0, 0, 1), -1 / baseline)]);
            double read = planar.Points.Sum(p => p.Share * Vec3.Dot(p.Axis, EnvironmentNoise.Field(5, p.Position, radius)));
            RelativeAssert.Equal(Math.Sqrt(0.9) / 4 / radius, read, Rounding);
        }
    }

    [Fact]
    public void Covariance_TurnsWithTheArray()
    {
        // The terms of each degree span one representation of rotations: turning sites and axes together leaves every covariance as it is.
        MegChannel[] channels = Array("magnetometer", 40);
        Vec3 Turn(Vec3 v) => new(0.36 * v.X + 0.48 * v.Y - 0.8 * v.Z, -0.8 * v.X + 0.6 * v.Y, 0.48 * v.X + 0.64 * v.Y + 0.6 * v.Z);
        MegChannel[] turned = [.. channels.Select(c => c with { Points = [.. c.Points.Select(p => new CoilPoint(Turn(p.Position), Turn(p.Axis), p.Share))] })];
        RelativeAssert.Close(Covariance(channels), Covariance(turned), Rounding);

        static double[] Covariance(MegChannel[] channels) =>
            new NoiseModel { EegRows = 0, MegRows = channels.Length, Terms = [new EnvironmentNoise(channels, 1, 0)] }.InBand(10, 20).Meg;
    }

    [Theory]
    [InlineData("magnetometer", 8)]
    [InlineData("axial-gradiometer", 5)]
    [InlineData("planar-gradiometer", 5)]
    [InlineData("on-scalp-triaxial", 8)]
    public void Removal_TakesEveryTermOut_AndNothingElse(string coil, int seen)
    {
        MegChannel[] channels = Array(coil, 50);
        double[] densities = Densities(channels);
        ChannelOperator removal = TermRemoval.Of(channels, densities, out int removed);
        Assert.Equal(seen, removed);
        double[] pattern = EnvironmentNoise.Pattern(channels), left = removal.ApplyToRows(pattern, EnvironmentNoise.Terms);
        RelativeAssert.Close(pattern, [.. pattern.Zip(left, (a, b) => a + b)], Rounding, "terms left over");
        double[] once = removal.ApplyToRows(Identity(channels.Length), channels.Length), twice = removal.ApplyToRows(once, channels.Length);
        RelativeAssert.Close(once, twice, Rounding, "P P = P");
        RelativeAssert.Equal(channels.Length - seen, Enumerable.Range(0, channels.Length).Sum(k => once[k * channels.Length + k]), Rounding, "the trace is the rank");
        var noise = new InstrumentNoise(null, densities);
        NoiseModel model = new() { EegRows = 0, MegRows = channels.Length, Terms = [noise], MegOperator = removal };
        Assert.Equal(channels.Length - seen, Whitener.Of(model.InBand(1, 40).Meg, channels.Length).Rank);
    }

    [Fact]
    public void Removal_IsThatOfItsSlowTwin_ForUnlikeCoils()
    {
        MegChannel[] channels = Mixed();
        double[] densities = Densities(channels);
        ChannelOperator removal = TermRemoval.Of(channels, densities, out _);
        Matrix<double> plain = PlainRemoval.Projector(channels, densities);
        int m = channels.Length;
        for (int k = 0; k < m; k++)
        {
            // Rows of one unit: T of T, T of T/m, and so on; compared in units of the noise.
            double[] row = [.. removal.Weights(k).Select((w, j) => w * densities[j] / densities[k])];
            double[] expected = [.. plain.Row(k).Select((w, j) => w * densities[j] / densities[k])];
            RelativeAssert.Close(expected, row, 1e-10, channels[k].Name);
        }
    }

    [Fact]
    public void ProjectedLeadfield_IsTheOperatorTimesTheLeadfield()
    {
        MegChannel[] channels = Mixed();
        ChannelOperator removal = TermRemoval.Of(channels, Densities(channels), out _);
        var inner = new MegSource(new MegSphere(Centre, channels), channels.Length);
        var projected = new ProjectedSource(inner, removal);
        LeadfieldBlock plain = new(0, channels.Length), block = new(0, channels.Length);
        Vec3[] places = [.. Enumerable.Range(0, 5).Select(k => Centre + new Vec3(0.01 * k, 0.03, 0.02))];
        plain.Load(places, default);
        block.Load(places, default);
        inner.Fill(plain);
        projected.Fill(block);
        double[] expected = removal.ApplyToRows(plain.Meg, 3 * LeadfieldBlock.Lanes);
        RelativeAssert.Close(expected, block.Meg, Rounding);
        Assert.Contains("removal of the room's", projected.Method.Meg, StringComparison.Ordinal);
    }

    [Fact]
    public void MatchedFilter_AfterRemoval_DoesNotDependOnTheScalesOfUnlikeCoils()
    {
        MegChannel[] channels = Mixed();
        double[] densities = Densities(channels), signal = Signal(channels);
        ChannelOperator one = TermRemoval.Of(channels, densities, out _), other = TermRemoval.Of(channels, [.. densities.Select((d, k) => d * (1 + 0.4 * Math.Sin(k)))], out _);
        RelativeAssert.Equal(Filter(channels, one, densities, signal), Filter(channels, other, densities, signal), FilterRounding);
    }

    [Theory]
    [InlineData("magnetometer")]
    [InlineData("axial-gradiometer")]
    [InlineData("mixed")]
    public void MatchedFilter_AfterRemoval_IsThatOfARoomOfEndlessNoise(string coil)
    {
        // With noise of density d in its terms the ideal filter approaches the one that ignores them as 1/d^2. Ten thousand times the magnetometers' density leave 1e-8; planar
        // gradiometers read gradients of 0.24 d over 0.1 m, some 240 times their density: 2e-5, of which the signal's share in the terms is a part.
        const double limit = 1e-5;
        MegChannel[] channels = coil == "mixed" ? Mixed() : Array(coil, 60);
        double[] densities = Densities(channels), signal = Signal(channels);
        double removed = Filter(channels, TermRemoval.Of(channels, densities, out _), densities, signal);
        double loud = Filter(channels, null, densities, signal, 3e-11), quiet = Filter(channels, null, densities, signal, 3e-18);
        RelativeAssert.Equal(removed, loud, limit);
        Assert.True(removed < loud && loud < quiet, "noise in a direction never helps, and never costs more than leaving the direction out");
    }

    [Fact]
    public void TooFewChannels_AreRefused()
    {
        MegChannel[] channels = Array("magnetometer", 8);
        var choice = new NoiseChoice { MegDensity = 3e-15, Environment = new(3e-15, 0, Removed: true) };
        InputException error = Assert.Throws<InputException>(() => new NoiseBuilder(choice, 0, [.. channels.Select(c => c.Kind)], null, null, null, channels).Build(null, null, []));
        Assert.Equal("noise.environment.removed", error.Problems[0].Key);
        Assert.Contains("8 channels", error.Problems[0].Message, StringComparison.Ordinal);
    }

    private static double Filter(MegChannel[] channels, ChannelOperator? removal, double[] densities, double[] signal, double room = 0)
    {
        int m = densities.Length;
        INoiseTerm[] terms = room > 0 ? [new InstrumentNoise(null, densities), new EnvironmentNoise(channels, room, 0)] : [new InstrumentNoise(null, densities)];
        NoiseModel model = new() { EegRows = 0, MegRows = m, Terms = terms, MegOperator = removal };
        double[] read = removal is null ? signal : removal.ApplyToRows(signal, 1);
        double[] block = [.. read.SelectMany(b => Enumerable.Repeat(b, 3 * LeadfieldBlock.Lanes))];
        var whitener = Whitener.Of(model.InBand(1, 40).Meg, m);
        double[] white = new double[3 * LeadfieldBlock.Lanes * whitener.Rank];
        whitener.Apply(block, white);
        return Enumerable.Range(0, whitener.Rank).Sum(k => Math.Pow(white[LeadfieldBlock.At(k, 0)], 2));
    }

    private static double[] Signal(MegChannel[] channels)
    {
        var block = new LeadfieldBlock(0, channels.Length);
        block.Load([Centre + new Vec3(0.03, 0.02, 0.03)], default);
        new MegSphere(Centre, channels).Fill(block);
        return [.. Enumerable.Range(0, channels.Length).Select(k => 1e-8 * block.Meg[LeadfieldBlock.At(k, 0)])];
    }

    private static double[] Identity(int n) => [.. Enumerable.Range(0, n * n).Select(k => k / n == k % n ? 1.0 : 0.0)];

    private sealed class MegSource(MegSphere sphere, int rows) : ILeadfieldSource
    {
        public int EegRows => 0;

        public int MegRows => rows;

        public LeadfieldMethod Method { get; } = new("", "closed form");

        public void Fill(LeadfieldBlock block) => sphere.Fill(block);
    }
}
