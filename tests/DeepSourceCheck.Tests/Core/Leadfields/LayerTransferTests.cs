using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields.Spheres;
using DeepSourceCheck.Tests.References;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Leadfields;

/// <summary>Degree coefficients against the radial equation, closed forms and their own limits.</summary>
public class LayerTransferTests
{
    /// <summary>Fourth-order integration with 4,000 steps a layer: below 1e-10 at these degrees; the comparison allows ten times that.</summary>
    private const double Integrated = 1e-9;

    /// <summary>A few roundings.</summary>
    private const double Rounding = 1e-14;

    [Theory]
    [InlineData(1)]
    [InlineData(2)]
    [InlineData(5)]
    [InlineData(20)]
    public void Coefficient_OfAnisotropicLayers_SolvesTheRadialEquation(int n)
    {
        LayeredSphere[] heads =
        [
            SphereLeadfields.Anisotropic(Vec3.Zero, (0.078, 0.33, 0.33), (0.080, 1.79, 1.2), (0.086, 0.004, 0.04), (0.092, 0.43, 0.3)),
            SphereLeadfields.Anisotropic(Vec3.Zero, (0.070, 0.33, 0.5), (0.080, 0.04, 0.004), (0.092, 0.43, 0.43)),
            SphereLeadfields.Anisotropic(Vec3.Zero, (0.070, 0.5, 0.2), (0.0701, 2.0, 2.0), (0.092, 0.01, 0.02)),
            SphereLeadfields.Adult,
        ];
        foreach (LayeredSphere head in heads)
        {
            RelativeAssert.Equal(RadialEquation.Coefficient(head, n), new LayerTransfer(head).Coefficient(n), Integrated, $"degree {n}");
        }
    }

    [Theory]
    [InlineData(1)]
    [InlineData(10)]
    [InlineData(100)]
    public void Coefficient_OfEqualLayers_IsHomogeneous(int n)
    {
        // T_n = (2n+1)/(4 pi sigma R n) (r_1/R)^n: the expansion of the homogeneous sphere.
        LayerTransfer transfer = new(SphereLeadfields.Isotropic(Vec3.Zero, (0.07, 0.3), (0.0700001, 0.3), (0.09, 0.3), (0.1, 0.3)));
        RelativeAssert.Equal((2 * n + 1) / (4 * Math.PI * 0.3 * 0.1 * n) * Math.Pow(0.7, n), transfer.Coefficient(n), n * Rounding);
    }

    [Fact]
    public void Coefficient_OfAVanishinglyThinLayer_ApproachesItsSheetResistance()
    {
        // A film of thickness h and conductivity s adds h/(s r) to the ratio of potential to r times flux: first-order in h, thus its derivative is checked.
        const double h = 1e-10, s = 1e-6, r = 0.08, sigma = 0.33, outer = 0.09;
        LayeredSphere film = SphereLeadfields.Isotropic(Vec3.Zero, (r, sigma), (r + h, s), (outer, sigma));
        const int n = 3;
        double y = 1 / (1 / (sigma * n) + h / (s * r)); // s_r r u'/u behind the film
        double q = Math.Pow(r / outer, 2 * n + 1), t = (sigma * n - y) / (y + sigma * (n + 1));
        double atSurface = sigma * (n - (n + 1) * t * q) / (1 + t * q);
        double chain = y / (sigma * n) * Math.Pow(r / outer, n) * (1 + t) / (1 + t * q);
        RelativeAssert.Equal((2 * n + 1) / (4 * Math.PI * outer * atSurface) * chain, new LayerTransfer(film).Coefficient(n), 1e-8); // next order: h/r
    }

    [Fact]
    public void Coefficient_AtDegreesWherePowersOfRadiiOverflow_IsFinite()
    {
        // r^-(n+1) with r in metres leaves the range of doubles near degree 290.
        LayerTransfer transfer = new(SphereLeadfields.Anisotropic(Vec3.Zero, (0.078, 0.33, 0.33), (0.080, 1.79, 1.79), (0.086, 0.004, 0.04), (0.092, 0.43, 0.43)));
        Assert.False(double.IsFinite(Math.Pow(0.08, -291) * Math.Pow(0.08, -291) / Math.Pow(0.08, 400)));
        double before = transfer.Coefficient(1);
        for (int n = 2; n <= 3000; n++)
        {
            double now = transfer.Coefficient(n);
            Assert.True(now >= 0 && now <= before, $"degree {n}: {now} after {before}");
            before = now;
        }
    }

    [Fact]
    public void Exponent_SolvesTheIndicialEquation()
    {
        LayerTransfer transfer = new(SphereLeadfields.Anisotropic(Vec3.Zero, (0.08, 0.3, 0.3), (0.09, 0.01, 0.1), (0.1, 1.0, 1e-3)));
        for (int n = 1; n < 1000; n += 37)
        {
            Assert.Equal(n, transfer.Exponent(0, n));
            foreach ((int layer, double ratio) in new[] { (1, 10.0), (2, 1e-3) })
            {
                double v = transfer.Exponent(layer, n);
                RelativeAssert.Equal(ratio * n * (n + 1.0), v * (v + 1), Rounding);
            }
        }
    }

    [Fact]
    public void Layers_ThatCannotBe_AreRefused()
    {
        Assert.Throws<ArgumentException>(() => new LayerTransfer(SphereLeadfields.Isotropic(Vec3.Zero, (0.08, 0.3), (0.08, 0.3))));
        Assert.Throws<ArgumentException>(() => new LayerTransfer(SphereLeadfields.Isotropic(Vec3.Zero, (-0.08, 0.3))));
        Assert.Throws<ArgumentException>(() => new LayerTransfer(SphereLeadfields.Isotropic(Vec3.Zero, (0.08, 0.0))));
        Assert.Throws<ArgumentException>(() => new LayerTransfer(SphereLeadfields.Isotropic(Vec3.Zero, (0.08, double.NaN))));
        Assert.Throws<ArgumentException>(() => new LayerTransfer(SphereLeadfields.Anisotropic(Vec3.Zero, (0.08, 0.3, double.PositiveInfinity))));
        Assert.Throws<ArgumentException>(() => new LayerTransfer(SphereLeadfields.Isotropic(Vec3.Zero, (double.PositiveInfinity, 0.3))));
    }
}
