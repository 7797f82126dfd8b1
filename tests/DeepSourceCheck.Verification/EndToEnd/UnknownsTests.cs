using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Spheres;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;

using MathNet.Numerics.Distributions;

namespace DeepSourceCheck.Verification.EndToEnd;

/// <summary>The low-discrepancy run over unknowns against a plain simulation of the same unknowns: another stream, dipole by dipole, leadfields asked for directly.</summary>
public class UnknownsTests
{
    // 20,000 pseudo-random draws hold a 5 or 95 % quantile of trials, spread by a factor of ten, to some 2 % (order statistics); 4096 low-discrepancy ones to some 3 %.
    private const double Sampling = 0.06;

    private static readonly Vec3 Source = new(-6, -33, -11);

    private const string Study = WholeChain.Adult + """
        sensors: {eeg: {layout: ten-twenty-21, reference: average}, eeg_derivations: [Cz-mastoids], meg: {coil: magnetometer, sites: 100, gap_mm: 20}}
        noise: {eeg_sensor_uV_rms: 2, meg_sensor_fT_rms: 112}
        regions: [{name: source, points: points.tsv}]
        responses: [{name: r, regions: [source], moment_nAm: {low: 2, typical: 4, high: 9}, band_Hz: [100, 1500], direction: [0, 0, 1]}]
        protocol: {rate_per_s: 11.1, session_min: 5}
        unknowns:
          skull_conductivity_ratio: {low: 15, typical: 25, high: 80}
          noise_factor: {low: 0.7, typical: 1, high: 1.5}
          head_shift_mm: 5
          centre_shift_mm: 5
          samples: 4096
        """;

    [Fact]
    public void Quantiles_OfTrials_AreThoseOfAPlainSimulation()
    {
        WholeChain run = WholeChain.Run(Study, WholeChain.Points("points.tsv", ("p", Source)));
        const int seed = 20261201, draws = 20_000;
        var random = new Random(seed);
        var eeg = new double[draws];
        var meg = new double[draws];
        LayeredSphere nominal = Assert.IsType<SphereHeadChoice>(run.Prepared.Study.Head).Sphere;
        Electrode[] electrodes = ElectrodeLayout.OnSphere("ten-twenty-21", nominal, ["M1", "M2"]);
        MegChannel[] channels = CoilArray.Generate(new CoilArrayChoice("magnetometer", 100, 0, 0.020, CoilArray.DefaultEdgeFront, CoilArray.DefaultEdgeBack), nominal.Centre, nominal.OuterRadius);
        for (int k = 0; k < draws; k++)
        {
            double moment = Split(2e-9, 4e-9, 9e-9), ratio = Split(15, 25, 80), noise = Split(0.7, 1, 1.5);
            Vec3 head = 0.005 * Gaussian(), centre = 0.005 * Gaussian();

            // Everything is told in the sphere's own frame: source and coils move against it, electrodes do not.
            var sphere = new LayeredSphere("drawn", nominal.Centre, [.. nominal.Layers.Select(l => l.Tissue == "skull" ? l with { RadialConductivity = 0.33 / ratio, TangentialConductivity = 0.33 / ratio } : l)]);
            MegChannel[] moved = [.. channels.Select(c => c with { Points = [.. c.Points.Select(p => p with { Position = Outside(p.Position - head - centre) })] })];
            var block = new LeadfieldBlock(electrodes.Length, moved.Length);
            block.Load([new Vec3(Source.X / 1000, Source.Y / 1000, Source.Z / 1000) - centre], default);
            new SphereLeadfield(sphere, electrodes, moved).Fill(block);
            double At(string name) => block.Eeg[LeadfieldBlock.At(Array.FindIndex(electrodes, e => e.Name == name), 2)];
            double reading = moment * (At("Cz") - 0.5 * (At("M1") + At("M2"))), rms = 2e-6 * noise * Math.Sqrt(1.5);
            double field = moment * Enumerable.Range(0, moved.Length).Max(c => Math.Abs(block.Meg[LeadfieldBlock.At(c, 2)])), sd = 112e-15 * noise;
            eeg[k] = 9 * rms * rms / (reading * reading);
            meg[k] = 9 * sd * sd / (field * field);
        }

        Check(Spread(Modality.Eeg), [.. eeg.Order()]);
        Check(Spread(Modality.Meg), [.. meg.Order()]);

        VerdictSpread Spread(Modality modality) => run.Region().Unknowns!.Verdicts.Single(v => v.Modality == modality);

        double Split(double low, double typical, double high)
        {
            double z = Normal.InvCDF(0, 1, random.NextDouble());
            return typical * Math.Exp(z * Math.Log(z < 0 ? typical / low : high / typical) / 1.6448536269514722);
        }

        // A sensor that a rare draw would put into the head rests 1 mm off it.
        Vec3 Outside(Vec3 point) => (point - nominal.Centre).Norm >= nominal.OuterRadius + 0.001 ? point : nominal.Centre + (nominal.OuterRadius + 0.001) * (point - nominal.Centre).Unit();

        Vec3 Gaussian() => new(Normal.InvCDF(0, 1, random.NextDouble()), Normal.InvCDF(0, 1, random.NextDouble()), Normal.InvCDF(0, 1, random.NextDouble()));

        void Check(VerdictSpread spread, double[] simulated)
        {
            (long? Found, double Share)[] percentiles = [(spread.Trials.P05, 0.05), (spread.Trials.P50, 0.5), (spread.Trials.P95, 0.95)];
            foreach ((long? found, double share) in percentiles)
            {
                double expected = simulated[(int)(share * draws)];
                Assert.True(Math.Abs(found!.Value / expected - 1) < Sampling, FormattableString.Invariant($"seed {seed}, {spread.Modality}, {share}: {found} against {expected:0}"));
            }

            const double session = 5 * 60 * 11.1;
            Assert.InRange(spread.Assurance!.Value, simulated.Count(n => Math.Ceiling(n) <= session) / (double)draws - 0.03, simulated.Count(n => Math.Ceiling(n) <= session) / (double)draws + 0.03);
        }
    }
}
