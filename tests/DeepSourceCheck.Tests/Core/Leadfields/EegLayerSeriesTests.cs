using System.Text.Json;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Spheres;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Tests.References;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Leadfields;

/// <summary>The EEG kernel against reference cases, its slow twin and closed forms.</summary>
public class EegLayerSeriesTests
{
    /// <summary>Tail 1e-13 plus rounding of the recurrence at up to some 100 degrees; the reference cases allow 1e-10.</summary>
    private const double Series = 1e-12;

    /// <summary>Near the boundary the cosine's own rounding is amplified by the square of the degree (some 500 to 3000).</summary>
    private const double NearBoundary = 2e-11;

    /// <summary>Two formulas for the same number at few degrees.</summary>
    private const double Rounding = 2e-14;

    private static readonly double[] Depths = [1e-9, 1e-6, 0.01, 0.05, 0.3, 0.6, 0.8, 0.9, 0.95, 0.98, 0.995];

    public static TheoryData<string> Heads => [.. Named.Keys];

    private static readonly Dictionary<string, (LayeredSphere Head, int Degrees, double Tolerance)> Named = new()
    {
        ["four layers"] = (SphereLeadfields.Adult, 420, Series),
        ["three layers"] = (SphereLeadfields.Isotropic(new(0.01, 0.02, -0.03), (0.080, 0.33), (0.086, 0.0042), (0.092, 0.33)), 420, Series),
        ["two layers, conducting shell"] = (SphereLeadfields.Isotropic(Vec3.Zero, (0.07, 0.2), (0.09, 20.0)), 420, Series),
        ["anisotropic skull, tangential 10 to 1"] = (SphereLeadfields.Anisotropic(Vec3.Zero, (0.078, 0.33, 0.33), (0.080, 1.79, 1.79), (0.086, 0.004, 0.04), (0.092, 0.43, 0.43)), 420, Series),
        ["anisotropic skull, radial 10 to 1"] = (SphereLeadfields.Anisotropic(Vec3.Zero, (0.080, 0.33, 0.33), (0.086, 0.04, 0.004), (0.092, 0.33, 0.5)), 700, Series),
        ["anisotropic innermost layer, tangential"] = (SphereLeadfields.Anisotropic(Vec3.Zero, (0.080, 0.2, 0.5), (0.086, 0.01, 0.03), (0.092, 0.33, 0.33)), 420, Series),
        ["anisotropic innermost layer, radial"] = (SphereLeadfields.Anisotropic(Vec3.Zero, (0.080, 0.5, 0.2), (0.086, 0.03, 0.01), (0.092, 0.33, 0.33)), 700, Series),
        ["thin layers"] = (SphereLeadfields.Isotropic(Vec3.Zero, (0.0890, 0.33), (0.0895, 1.79), (0.0910, 0.0132), (0.0920, 0.43)), 1400, NearBoundary),
        ["films of a micrometre"] = (SphereLeadfields.Isotropic(Vec3.Zero, (0.080, 0.33), (0.080001, 5.0), (0.086, 0.0132), (0.086001, 1e-4), (0.092, 0.43)), 500, NearBoundary),
    };

    [Fact]
    public void Leadfield_OfThreeLayers_MeetsReferenceCase04()
    {
        // Independent 40-digit calculator, degree coefficients from the full boundary system; provenance in the file.
        JsonElement reference = ReferenceCase.Sphere("04");
        JsonElement inputs = reference.GetProperty("inputs"), expected = reference.GetProperty("expected"), tolerance = reference.GetProperty("tolerance");
        Vec3 centre = new[] { inputs.GetProperty("sphere_centre_m") }.Select(c => c.Numbers()).Select(c => new Vec3(c[0], c[1], c[2])).Single();
        double[] radii = inputs.GetProperty("radii_m_innermost_first").Numbers(), sigma = inputs.GetProperty("conductivity_S_per_m_innermost_first").Numbers();
        LayeredSphere head = SphereLeadfields.Isotropic(centre, [.. radii.Zip(sigma)]);
        Vec3[] moments = inputs.GetProperty("dipole_moment_A_m").Points();
        double[][] actual = SphereLeadfields.Eeg(
            head, inputs.GetProperty("dipole_position_m").Points(), SphereLeadfields.Electrodes(inputs.GetProperty("electrode_position_m").Points()));
        for (int d = 0; d < actual.Length; d++)
        {
            double[] average = SphereLeadfields.AverageReferenced(actual[d]);
            RelativeAssert.Close(expected.GetProperty("leadfield_sphere_mean_zero_V_per_A_m")[d].Flat(), actual[d],
                tolerance.GetProperty("leadfield_sphere_mean_zero_V_per_A_m").GetProperty("limit").GetDouble(), $"dipole {d}, mean zero,");
            RelativeAssert.Close(expected.GetProperty("leadfield_average_reference_V_per_A_m")[d].Flat(), average,
                tolerance.GetProperty("leadfield_average_reference_V_per_A_m").GetProperty("limit").GetDouble(), $"dipole {d}, average,");
            RelativeAssert.Close(expected.GetProperty("potential_average_reference_V")[d].Flat(), SphereLeadfields.Times(average, moments[d]),
                tolerance.GetProperty("potential_average_reference_V").GetProperty("limit").GetDouble(), $"dipole {d}, potential,");
        }
    }

    // The kernel rests on reciprocity (current through the electrode), the twin on the source itself: their agreement is the reciprocity theorem too.
    [Theory]
    [MemberData(nameof(Heads))]
    public void Leadfield_AtEveryDepth_EqualsTextbookTwin(string name)
    {
        (LayeredSphere head, int degrees, double tolerance) = Named[name];
        TextbookEegSeries twin = new(head, degrees);
        Electrode[] electrodes = SphereLeadfields.Electrodes(head, 21);
        for (int k = 0; k < Depths.Length; k++)
        {
            Vec3 position = head.Centre + Depths[k] * head.InnerRadius * GoldenSpiral.Point(k, Depths.Length);
            double[] actual = SphereLeadfields.Eeg(head, [position], electrodes)[0];
            RelativeAssert.Close(twin.Leadfield(position, [.. electrodes.Select(e => e.Position)]).Flat(), actual, tolerance, $"{name}, eccentricity {Depths[k]},");
        }
    }

    [Theory]
    [InlineData(1e-9)]
    [InlineData(0.3)]
    [InlineData(0.9)]
    [InlineData(0.98)]
    [InlineData(0.995)]
    public void Leadfield_OfEqualLayers_IsTheHomogeneousClosedForm(double eccentricity)
    {
        LayeredSphere head = SphereLeadfields.Isotropic(new(0.01, 0, 0), (0.08, 0.4), (0.081, 0.4), (0.09, 0.4), (0.1, 0.4));
        Electrode[] electrodes = SphereLeadfields.Electrodes(head, 40, -1);
        Vec3 offset = eccentricity * 0.08 * new Vec3(0.6, -0.48, 0.64);
        double[] expected = [.. electrodes.Select(e => HomogeneousSphere.Leadfield(offset, (e.Position - head.Centre).Unit(), 0.1, 0.4)).Flat()];
        RelativeAssert.Close(expected, SphereLeadfields.Eeg(head, [head.Centre + offset], electrodes)[0], Series);
    }

    [Theory]
    [InlineData(0.5, Series)]
    [InlineData(0.98, NearBoundary)]
    [InlineData(0.995, 10 * NearBoundary)] // some 6,000 degrees
    public void Leadfield_OfOneLayer_IsTheHomogeneousClosedForm(double eccentricity, double tolerance)
    {
        LayeredSphere head = SphereLeadfields.Isotropic(Vec3.Zero, (0.09, 0.33));
        Vec3 offset = eccentricity * 0.09 * new Vec3(0.6, -0.48, 0.64);
        Electrode[] electrodes = [.. SphereLeadfields.Electrodes(head, 20, -1), .. SphereLeadfields.Electrodes([0.09 * offset.Unit()])];
        double[] expected = [.. electrodes.Select(e => HomogeneousSphere.Leadfield(offset, e.Position.Unit(), 0.09, 0.33)).Flat()];
        RelativeAssert.Close(expected, SphereLeadfields.Eeg(head, [offset], electrodes)[0], tolerance);
    }

    [Fact]
    public void Leadfield_OfEqualAnisotropyInBothDirections_IsTheIsotropicOne()
    {
        LayeredSphere isotropic = SphereLeadfields.Adult;
        // A difference of one unit in the last place takes the anisotropic path without changing the physics.
        LayeredSphere nearly = new("nearly", isotropic.Centre, [.. isotropic.Layers.Select(l => l with { TangentialConductivity = double.BitIncrement(l.RadialConductivity) })]);
        Assert.False(new LayerTransfer(nearly).InnermostIsIsotropic);
        Electrode[] electrodes = SphereLeadfields.Electrodes(isotropic, 30);
        Vec3[] positions = [.. new[] { 1e-3, 0.2, 0.7, 0.95, 0.995 }.Select((e, k) => isotropic.Centre + e * isotropic.InnerRadius * GoldenSpiral.Point(k, 5))];
        double[][] expected = SphereLeadfields.Eeg(isotropic, positions, electrodes), actual = SphereLeadfields.Eeg(nearly, positions, electrodes);
        for (int d = 0; d < positions.Length; d++)
        {
            RelativeAssert.Close(expected[d], actual[d], Series);
        }
    }

    [Fact]
    public void Leadfield_AtTheCentreOfAHomogeneousSphere_IsThreeTimesTheInfiniteMedium()
    {
        LayeredSphere head = SphereLeadfields.Isotropic(new(0.0015, -0.008, 0.045), (0.092, 0.33));
        Electrode[] electrodes = SphereLeadfields.Electrodes(head, 20, -1);
        double[] expected = electrodes.Select(e => 3 * HomogeneousSphere.InfiniteMedium(Vec3.Zero, e.Position - head.Centre, 0.33)).Flat();
        RelativeAssert.Close(expected, SphereLeadfields.Eeg(head, [head.Centre], electrodes)[0], Rounding);
    }

    [Fact]
    public void Leadfield_AtTheCentre_IsTheLimitFromOneNanometre()
    {
        LayeredSphere head = SphereLeadfields.Isotropic(Vec3.Zero, (0.078, 0.33), (0.080, 1.79), (0.086, 0.0132), (0.092, 0.43));
        Electrode[] electrodes = SphereLeadfields.Electrodes(head, 20, -1);
        double[][] values = SphereLeadfields.Eeg(head, [Vec3.Zero, new(0, 0, 1e-9), new(0, 0, 1e-6)], electrodes);
        // The field changes over lengths of the radius: 1 nm and 1 um are 1e-8 and 1e-5 of it.
        Assert.InRange(RelativeAssert.NormError(values[0], values[1]), 1e-10, 1e-7);
        Assert.InRange(RelativeAssert.NormError(values[0], values[2]), 1e-7, 1e-4);
    }

    [Theory]
    [InlineData(0.05)]
    [InlineData(0.5)]
    [InlineData(0.98)]
    [InlineData(0.995)]
    public void Leadfield_OfAnAlignedElectrode_HasNoTangentialPartAndTheTextbookRadialPart(double eccentricity)
    {
        LayeredSphere head = SphereLeadfields.Adult;
        Vec3 up = new(0, 0, 1);
        Vec3 position = head.Centre + eccentricity * head.InnerRadius * up;
        Electrode[] electrodes = SphereLeadfields.Electrodes([head.Centre + 0.092 * up, head.Centre - 0.092 * up]);
        double[] actual = SphereLeadfields.Eeg(head, [position], electrodes)[0];
        Vec3[] expected = new TextbookEegSeries(head, 420).Leadfield(position, [.. electrodes.Select(e => e.Position)]);
        RelativeAssert.Close(expected.Flat(), actual, Series);
        Assert.Equal([0.0, 0.0, 0.0, 0.0], new[] { actual[0], actual[1], actual[3], actual[4] });
    }

    [Fact]
    public void Leadfield_OfEightDipolesAtOnce_IsThatOfEachAlone()
    {
        LayeredSphere head = SphereLeadfields.Adult;
        Electrode[] electrodes = SphereLeadfields.Electrodes(head, 7);
        Vec3[] positions = [.. Enumerable.Range(0, 8).Select(k => head.Centre + 0.12 * k * head.InnerRadius * GoldenSpiral.Point(k, 8))];
        double[][] together = SphereLeadfields.Eeg(head, positions, electrodes);
        for (int k = 0; k < 8; k++)
        {
            // Alone, a deep dipole stops at fewer degrees: the difference is the neglected tail.
            RelativeAssert.Close(together[k], SphereLeadfields.Eeg(head, [positions[k]], electrodes)[0], Series);
        }
    }

    [Fact]
    public void Leadfield_OfAnElectrodeOffTheSurface_IsThatOfItsDirection()
    {
        LayeredSphere head = SphereLeadfields.Adult;
        Electrode[] on = SphereLeadfields.Electrodes(head, 12);
        Electrode[] off = [.. on.Select((e, k) => e with { Position = head.Centre + (0.9 + 0.02 * k) * (e.Position - head.Centre) })];
        Vec3 position = head.Centre + new Vec3(0.01, 0.03, -0.02);
        RelativeAssert.Close(SphereLeadfields.Eeg(head, [position], on)[0], SphereLeadfields.Eeg(head, [position], off)[0], Rounding);
    }

    [Fact]
    public void Fill_BeyondTheInnermostLayer_IsRefused()
    {
        LayeredSphere head = SphereLeadfields.Adult;
        Electrode[] electrodes = SphereLeadfields.Electrodes(head, 4);
        foreach (Vec3 wrong in new[] { head.Centre + new Vec3(0, 0, 0.0779), new Vec3(double.NaN, 0, 0), new Vec3(double.PositiveInfinity, 0, 0) })
        {
            Assert.Throws<ArgumentOutOfRangeException>(() => SphereLeadfields.Eeg(head, [head.Centre, wrong], electrodes));
            Assert.Throws<ArgumentOutOfRangeException>(() => SphereLeadfields.Meg(head, [head.Centre, wrong], SphereLeadfields.Coils(head, 4)));
            LeadfieldBlock block = new(4, 0);
            block.Load([head.Centre, wrong], default);
            Assert.Throws<ArgumentOutOfRangeException>(() => new EegLayerSeries(head, electrodes).Fill(block));
        }
    }

    [Fact]
    public void Centre_OfAnAnisotropicInnermostLayer_IsRefusedByTheHeadAndTheKernel()
    {
        LayeredSphere head = Named["anisotropic innermost layer, radial"].Head;
        Assert.Contains("no potential", head.WhyRefused(head.Centre), StringComparison.Ordinal);
        Assert.Null(head.WhyRefused(head.Centre + new Vec3(2e-6, 0, 0)));
        Assert.Throws<ArgumentOutOfRangeException>(() => SphereLeadfields.Eeg(head, [head.Centre], SphereLeadfields.Electrodes(head, 4)));
    }

    [Fact]
    public void Fill_OnSeveralThreads_GivesTheSameBytes()
    {
        LayeredSphere head = SphereLeadfields.Adult;
        SphereLeadfield source = new(head, SphereLeadfields.Electrodes(head, 33), SphereLeadfields.Coils(head, 31));
        Vec3[] positions = [.. Enumerable.Range(0, 64).Select(k => head.Centre + 0.015 * k * head.InnerRadius * GoldenSpiral.Point(k, 64))];
        double[][] Run(int threads)
        {
            double[][] values = new double[8][];
            Parallel.For(0, 8, new ParallelOptions { MaxDegreeOfParallelism = threads }, b =>
            {
                LeadfieldBlock block = new(source.EegRows, source.MegRows);
                block.Load(positions.AsSpan(8 * b, 8), default);
                source.Fill(block);
                values[b] = [.. block.Eeg, .. block.Meg];
            });
            return values;
        }

        Assert.Equal(Run(1).SelectMany(v => v), Run(4).SelectMany(v => v));
    }
}
