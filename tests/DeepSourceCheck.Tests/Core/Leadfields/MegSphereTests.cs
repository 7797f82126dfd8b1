using System.Text.Json;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Tests.References;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Leadfields;

/// <summary>The MEG kernel against a reference case, its slow twin and the theorems of the spherical conductor.</summary>
public class MegSphereTests
{
    /// <summary>Roundings of two orders of evaluation; gradiometers cancel about one digit.</summary>
    private const double Rounding = 5e-14;

    private static readonly LayeredSphere Head = SphereLeadfields.Adult;

    [Fact]
    public void Leadfield_OfMagnetometers_MeetsReferenceCase01()
    {
        // Independent 40-digit calculator; provenance in the file.
        JsonElement reference = ReferenceCase.Sphere("01");
        JsonElement inputs = reference.GetProperty("inputs"), expected = reference.GetProperty("expected"), tolerance = reference.GetProperty("tolerance");
        double[] c = inputs.GetProperty("sphere_centre_m").Numbers();
        LayeredSphere head = SphereLeadfields.Isotropic(new(c[0], c[1], c[2]), (0.09, 0.33));
        Vec3[] moments = inputs.GetProperty("dipole_moment_A_m").Points();
        double[][] actual = SphereLeadfields.Meg(head, inputs.GetProperty("dipole_position_m").Points(), SphereLeadfields.Channels(inputs, CoilKind.Magnetometer));
        for (int d = 0; d < actual.Length; d++)
        {
            RelativeAssert.Close(expected.GetProperty("leadfield_T_per_A_m")[d].Flat(), actual[d],
                tolerance.GetProperty("leadfield_T_per_A_m").GetProperty("limit").GetDouble(), $"dipole {d}, leadfield,");
            RelativeAssert.Close(expected.GetProperty("signal_T")[d].Flat(), SphereLeadfields.Times(actual[d], moments[d]),
                tolerance.GetProperty("signal_T").GetProperty("limit").GetDouble(), $"dipole {d}, signal,");
        }
    }

    [Theory]
    [InlineData(1e-9)]
    [InlineData(1e-6)]
    [InlineData(1e-3)]
    [InlineData(0.04)]
    [InlineData(0.0776)]
    public void Leadfield_OfGradiometers_EqualsTextbookTwin(double distance)
    {
        // Head at the origin, so that a distance of a nanometre is not lost in the position itself.
        LayeredSphere head = SphereLeadfields.Isotropic(Vec3.Zero, (0.078, 0.33), (0.092, 0.43));
        MegChannel[] channels = SphereLeadfields.Coils(head, 50);
        Vec3 position = distance * new Vec3(0.36, 0.48, -0.8);
        double[] actual = SphereLeadfields.Meg(head, [position], channels)[0];
        for (int axis = 0; axis < 3; axis++)
        {
            Vec3 unit = new(axis == 0 ? 1 : 0, axis == 1 ? 1 : 0, axis == 2 ? 1 : 0);
            foreach (CoilKind kind in new[] { CoilKind.AxialGradiometer, CoilKind.PlanarGradiometer })
            {
                int[] rows = [.. Enumerable.Range(0, channels.Length).Where(k => channels[k].Kind == kind)];
                RelativeAssert.Close([.. rows.Select(k => TextbookSarvas.Channel(channels[k], head.Centre, position, unit))],
                    [.. rows.Select(k => actual[k * 3 + axis])], Rounding, $"{kind}, axis {axis},");
            }
        }
    }

    [Fact]
    public void Leadfield_AtTheCentre_IsExactlyZero()
    {
        double[] actual = SphereLeadfields.Meg(Head, [Head.Centre], SphereLeadfields.Coils(Head, 30))[0];
        Assert.All(actual, value => Assert.Equal(0.0, value));
    }

    [Fact]
    public void Leadfield_NearTheCentre_FallsLinearlyWithDistance()
    {
        LayeredSphere head = SphereLeadfields.Isotropic(Vec3.Zero, (0.078, 0.33), (0.092, 0.43));
        MegChannel[] channels = SphereLeadfields.Coils(head, 30);
        double[] far = SphereLeadfields.Meg(head, [new(3e-9, -4e-9, 1e-9)], channels)[0];
        double[] near = SphereLeadfields.Meg(head, [new(3e-12, -4e-12, 1e-12)], channels)[0];
        // The next order is distance over radius, 1e-7.
        RelativeAssert.Close(far, [.. near.Select(v => 1000 * v)], 1e-6);
    }

    [Fact]
    public void Rows_AreOrthogonalToTheRadius_SoThatARadialDipoleIsSilent()
    {
        // A radial dipole in a sphere gives no field outside: [Baule & McFee 1965], [Sarvas 1987].
        MegChannel[] channels = SphereLeadfields.Coils(Head, 80);
        Vec3[] positions = [.. Enumerable.Range(1, 40).Select(k => Head.Centre + 0.0019 * k * GoldenSpiral.Point(k, 41))];
        double[][] leadfields = SphereLeadfields.Meg(Head, positions, channels);
        for (int d = 0; d < positions.Length; d++)
        {
            Vec3 radial = (positions[d] - Head.Centre).Unit();
            for (int row = 0; row < channels.Length; row++)
            {
                Vec3 values = new(leadfields[d][row * 3], leadfields[d][row * 3 + 1], leadfields[d][row * 3 + 2]);
                // Three components, each to about one unit in the last place.
                Assert.True(Math.Abs(Vec3.Dot(values, radial)) <= 4e-16 * values.Norm, $"dipole {d}, row {row}");
            }
        }
    }

    [Fact]
    public void RadialFieldComponent_IsThatOfThePrimaryCurrentAlone()
    {
        // Volume currents of a spherical conductor have no radial field: [Grynszpan & Geselowitz 1973], [Sarvas 1987].
        Vec3[] sites = [.. Enumerable.Range(0, 40).Select(k => 0.115 * GoldenSpiral.Point(k, 40))];
        MegChannel[] radial = [.. sites.Select((s, k) => new MegChannel($"R{k}", CoilKind.Magnetometer, [new(Head.Centre + s, s.Unit(), 1)]))];
        Vec3 offset = new(0.02, -0.03, 0.035), moment = new(3e-9, 5e-9, -2e-9);
        double[] actual = SphereLeadfields.Times(SphereLeadfields.Meg(Head, [Head.Centre + offset], radial)[0], moment);
        RelativeAssert.Close([.. sites.Select(s => Vec3.Dot(s.Unit(), TextbookSarvas.PrimaryField(s, offset, moment)))], actual, Rounding);
    }

    [Fact]
    public void Field_HasNoDivergenceAndNoCurlOutside()
    {
        // Outside all currents B is the gradient of a harmonic potential; central differences of 0.1 mm leave (0.1/35 mm)^2 and rounding.
        const double step = 1e-4, differencing = 1e-4;
        Vec3 site = Head.Centre + new Vec3(0.03, 0.05, 0.1), offset = new(0.02, -0.03, 0.035), moment = new(3e-9, 5e-9, -2e-9);
        Vec3[] axes = [new(1, 0, 0), new(0, 1, 0), new(0, 0, 1)];
        MegChannel[] channels = [.. from a in axes from b in axes
                                    select new MegChannel("G", CoilKind.PlanarGradiometer, [new(site + step * a, b, 0.5 / step), new(site - step * a, b, -0.5 / step)])];
        double[] g = SphereLeadfields.Times(SphereLeadfields.Meg(Head, [Head.Centre + offset], channels)[0], moment);
        double top = g.Max(Math.Abs);
        Assert.InRange(Math.Abs(g[0] + g[4] + g[8]), 0, differencing * top);
        Assert.InRange(Math.Max(Math.Abs(g[1] - g[3]), Math.Max(Math.Abs(g[2] - g[6]), Math.Abs(g[5] - g[7]))), 0, differencing * top);
    }

    [Fact]
    public void Leadfield_DoesNotDependOnConductivityOrLayers()
    {
        MegChannel[] channels = SphereLeadfields.Coils(Head, 20);
        LayeredSphere other = SphereLeadfields.Isotropic(Head.Centre, (0.08, 5.0), (0.09, 0.001));
        Vec3 position = Head.Centre + new Vec3(0.01, 0.02, 0.03);
        Assert.Equal(SphereLeadfields.Meg(Head, [position], channels)[0], SphereLeadfields.Meg(other, [position], channels)[0]);
    }

    [Fact]
    public void PermeabilityConstant_IsTheOneOfTheReferenceCases() => Assert.Equal(1e-7, Si.Mu0Over4Pi);
}
