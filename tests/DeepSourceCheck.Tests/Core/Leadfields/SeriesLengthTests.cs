using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields.Spheres;

namespace DeepSourceCheck.Tests.Core.Leadfields;

/// <summary>The number of degrees follows from a bound on all that is left out.</summary>
public class SeriesLengthTests
{
    private static readonly LayeredSphere ThreeLayers = SphereLeadfields.Isotropic(Vec3.Zero, (0.080, 0.33), (0.086, 0.0125), (0.092, 0.33));
    private static readonly LayeredSphere ThinLayers = SphereLeadfields.Isotropic(Vec3.Zero, (0.0890, 0.33), (0.0905, 0.0125), (0.0920, 0.33));

    private static readonly LayeredSphere RadialSkull =
        SphereLeadfields.Anisotropic(Vec3.Zero, (0.080, 0.33, 0.33), (0.086, 0.05, 0.005), (0.092, 0.33, 0.33));

    [Fact]
    public void Degree_AtTheCentre_IsOne() => Assert.Equal(1, new SeriesLength(new(ThreeLayers)).DegreeAt(0));

    [Fact]
    public void Degree_GrowsWithEccentricity()
    {
        SeriesLength length = new(new(ThreeLayers));
        int before = 0;
        for (double x = 0; x <= 0.995; x += 0.0005)
        {
            int now = length.DegreeAt(x);
            Assert.True(now >= before);
            before = now;
        }
    }

    [Fact]
    public void Degree_AtReferenceCase04_ExceedsWhatOneTenBillionthNeeds()
    {
        // Degrees for 1e-10, measured at 40 digits: diagnostics of reference case 04; the stated tail here is a thousandth of that.
        SeriesLength length = new(new(ThreeLayers));
        foreach ((double eccentricity, int needed) in new[] { (0.05, 8), (0.2, 14), (0.95, 125), (0.98, 159) })
        {
            Assert.InRange(length.DegreeAt(eccentricity), needed, (int)(1.6 * needed + 8));
        }
    }

    [Fact]
    public void Degree_InThinLayers_IsFarAboveAHundred() => Assert.InRange(new SeriesLength(new(ThinLayers)).DegreeAt(0.98), 500, 1500);

    [Fact]
    public void Degree_OfARadiallyConductingSkull_ExceedsThatOfTheIsotropicOne() =>
        Assert.True(new SeriesLength(new(RadialSkull)).DegreeAt(0.9) > new SeriesLength(new(ThreeLayers)).DegreeAt(0.9));

    [Theory]
    [InlineData(0.02)]
    [InlineData(0.5)]
    [InlineData(0.9)]
    [InlineData(0.98)]
    [InlineData(0.995)]
    public void Terms_BeyondTheDegree_SumBelowTheTail(double eccentricity)
    {
        foreach (LayeredSphere head in new[] { ThreeLayers, ThinLayers, RadialSkull, SphereLeadfields.Isotropic(Vec3.Zero, (0.09, 0.3)) })
        {
            // The worst case of every remaining term at once: P_n = 1 and sin P_n' = n, summed far beyond the table.
            LayerTransfer transfer = new(head);
            SeriesLength length = new(transfer);
            int degree = length.DegreeAt(eccentricity);
            double rest = 0;
            for (int n = degree + 1; n < degree + 20000; n++)
            {
                double term = transfer.Coefficient(n) * Math.Pow(eccentricity, n - 1) * n * Math.Sqrt(2);
                rest += term;
                if (term < 1e-12 * rest)
                {
                    break;
                }
            }

            Assert.True(rest <= 1.5 * SeriesLength.Tail * transfer.Coefficient(1), $"{rest / transfer.Coefficient(1)} is left at degree {degree}");
        }
    }

    [Fact]
    public void Eccentricity_BeyondTheLimitOrNotANumber_IsRefused()
    {
        SeriesLength length = new(new(ThreeLayers));
        Assert.Throws<ArgumentOutOfRangeException>(() => length.DegreeAt(0.996));
        Assert.Throws<ArgumentOutOfRangeException>(() => length.DegreeAt(-0.1));
        Assert.Throws<ArgumentOutOfRangeException>(() => length.DegreeAt(double.NaN));
        Assert.True(length.DegreeAt(0.995) > 100);
    }
}
