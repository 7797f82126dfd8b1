using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Sensors;

namespace DeepSourceCheck.Tests.Core.Leadfields;

/// <summary>
/// Values of the project's table of facts, sections I.1 and I.2 (grade: derived, with plain formulas in an independent program), at the precision in which they are printed.
/// </summary>
public class PublishedSphereValuesTests
{
    private const double NanoAmpereMetre = 1e-9;

    private static readonly LayeredSphere Shells = SphereLeadfields.Isotropic(Vec3.Zero, (0.078, 0.33), (0.080, 1.79), (0.086, 0.008), (0.092, 0.43));

    /// <summary>Within half of the last printed digit.</summary>
    private static void Printed(double expected, double actual, double lastDigit, string what) =>
        Assert.True(Math.Abs(actual - expected) <= 0.5 * lastDigit * (1 + 1e-9), $"{what}: printed {expected}, actual {actual}");

    [Theory]
    [InlineData(30, 98.5, 4.121, 0.001)]
    [InlineData(30, 112, 2.637, 0.001)]
    [InlineData(30, 122, 1.974, 0.001)]
    [InlineData(30, 137, 1.344, 0.001)]
    [InlineData(50, 98.5, 11.32, 0.01)]
    [InlineData(50, 112, 6.415, 0.001)]
    [InlineData(50, 122, 4.514, 0.001)]
    [InlineData(50, 137, 2.874, 0.001)]
    public void PeakRadialField_OfATangentialDipole_IsTheTabulatedOne(double sourceMm, double sensorMm, double expected, double lastDigit)
    {
        MegChannel[] arc = [.. Enumerable.Range(1, 1800).Select(k => Radial(sensorMm / 1000, Math.PI * k / 1800))];
        double[] field = SphereLeadfields.Times(SphereLeadfields.Meg(Shells, [new(0, 0, sourceMm / 1000)], arc)[0], new(0, NanoAmpereMetre, 0));
        Printed(expected, field.Max(Math.Abs) * 1e15, lastDigit, "peak in fT");
    }

    [Theory]
    [InlineData(30, 49.8)]
    [InlineData(50, 31.9)]
    public void PeakAngle_AtAGapOf20Mm_IsTheTabulatedOne(double sourceMm, double expectedDeg)
    {
        MegChannel[] arc = [.. Enumerable.Range(1, 1800).Select(k => Radial(0.112, Math.PI * k / 1800))];
        double[] field = SphereLeadfields.Times(SphereLeadfields.Meg(Shells, [new(0, 0, sourceMm / 1000)], arc)[0], new(0, NanoAmpereMetre, 0));
        int peak = Array.FindIndex(field, f => Math.Abs(f) == field.Max(Math.Abs));
        Printed(expectedDeg, 0.1 * (peak + 1), 0.2, "angle in degrees"); // the arc itself has steps of 0.1 degrees
    }

    [Fact]
    public void FieldAtOnePoint_IsTheTabulatedOne()
    {
        double[] field = SphereLeadfields.Times(
            SphereLeadfields.Meg(Shells, [new(0, 0, 0.03)], [Radial(0.112, Math.PI * 50 / 180)])[0], new(0, NanoAmpereMetre, 0));
        Printed(2.6367, Math.Abs(field[0]) * 1e15, 0.0001, "field in fT");
    }

    [Theory]
    [InlineData(0, 0.0536, 0.0536, 90)]
    [InlineData(20, 0.0687, 0.0555, 71.0)]
    [InlineData(30, 0.0796, 0.0581, 61.5)]
    [InlineData(40, 0.0941, 0.0621, 52.5)]
    [InlineData(50, 0.1147, 0.0681, 43.5)]
    [InlineData(60, 0.1462, 0.0773, 34.5)]
    [InlineData(70, 0.2025, 0.0927, 25.5)]
    public void Potential_InFourShells_IsTheTabulatedOne(double sourceMm, double radialUv, double tangentialUv, double angleDeg)
    {
        Electrode[] arc = SphereLeadfields.Electrodes(Enumerable.Range(0, 361).Select(k => 0.092 * new Vec3(Math.Sin(Math.PI * k / 360), 0, Math.Cos(Math.PI * k / 360))));
        double[] leadfield = SphereLeadfields.Eeg(Shells, [new(0, 0, sourceMm / 1000)], arc)[0];
        Printed(radialUv, leadfield[2] * NanoAmpereMetre * 1e6, 0.0001, "radial in uV");
        double[] tangential = SphereLeadfields.Times(leadfield, new(NanoAmpereMetre, 0, 0));
        Printed(tangentialUv, tangential.Max() * 1e6, 0.0001, "tangential in uV");
        Printed(angleDeg, 0.5 * Array.IndexOf(tangential, tangential.Max()), 1.0, "angle in degrees"); // printed on a grid of half a degree
    }

    [Theory]
    [InlineData(0.004, 0.052, 0.111)]
    [InlineData(0.008, 0.072, 0.175)]
    [InlineData(0.0132, 0.085, 0.234)]
    [InlineData(0.02, 0.095, 0.289)]
    [InlineData(0.033, 0.105, 0.361)]
    public void RadialPotential_OverSkullConductivity_IsTheTabulatedOne(double skull, double deepUv, double shallowUv)
    {
        LayeredSphere head = SphereLeadfields.Isotropic(Vec3.Zero, (0.078, 0.33), (0.080, 1.79), (0.086, skull), (0.092, 0.43));
        double[][] leadfield = SphereLeadfields.Eeg(head, [new(0, 0, 0.023), new(0, 0, 0.066)], SphereLeadfields.Electrodes([new(0, 0, 0.092)]));
        Printed(deepUv, leadfield[0][2] * NanoAmpereMetre * 1e6, 0.001, "deep, uV");
        Printed(shallowUv, leadfield[1][2] * NanoAmpereMetre * 1e6, 0.001, "shallow, uV");
    }

    [Fact]
    public void RadialPotential_InThreeShells_IsTheTabulatedOne()
    {
        LayeredSphere head = SphereLeadfields.Isotropic(Vec3.Zero, (0.080, 0.33), (0.086, 0.0042), (0.092, 0.33));
        double[][] leadfield = SphereLeadfields.Eeg(head, [new(0, 0, 0.023), new(0, 0, 0.066)], SphereLeadfields.Electrodes([new(0, 0, 0.092)]));
        Printed(0.0758, leadfield[0][2] * NanoAmpereMetre * 1e6, 0.0001, "deep, uV");
        Printed(0.1916, leadfield[1][2] * NanoAmpereMetre * 1e6, 0.0001, "shallow, uV");
    }

    private static MegChannel Radial(double radius, double angle)
    {
        Vec3 up = new(Math.Sin(angle), 0, Math.Cos(angle));
        return new("R", CoilKind.Magnetometer, [new(radius * up, up, 1)]);
    }
}
