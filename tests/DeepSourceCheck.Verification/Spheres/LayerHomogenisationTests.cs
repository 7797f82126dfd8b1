using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields.Spheres;

namespace DeepSourceCheck.Verification.Spheres;

/// <summary>
/// A fine stack of two isotropic materials is an anisotropic one: across the layers resistances add in series, along them conductances add in parallel.
/// This reaches the anisotropic exponents without using them. Source: series and parallel rule for laminates, e.g. Maxwell, Treatise, art. 321 (from memory).
/// </summary>
public class LayerHomogenisationTests
{
    private const double SkullInside = 0.080, SkullOutside = 0.086, Compact = 0.004, Spongy = 0.04;

    private static LayeredSphere Head(IEnumerable<SphereLayer> skull) =>
        new("stack", Vec3.Zero, [new("brain", SkullInside, 0.33, 0.33), .. skull, new("scalp", 0.092, 0.43, 0.43)]);

    /// <summary>Each pair begins and ends with half a sheet of the first material, which removes the first-order error.</summary>
    private static LayeredSphere Stack(int pairs)
    {
        double h = (SkullOutside - SkullInside) / pairs;
        return Head(Enumerable.Range(0, pairs).SelectMany(k => new[]
        {
            new SphereLayer("compact", SkullInside + (k + 0.25) * h, Compact, Compact),
            new SphereLayer("spongy", SkullInside + (k + 0.75) * h, Spongy, Spongy),
            new SphereLayer("compact", k + 1 == pairs ? SkullOutside : SkullInside + (k + 1) * h, Compact, Compact),
        }));
    }

    private static LayeredSphere Laminate() =>
        Head([new("skull", SkullOutside, 2 / (1 / Compact + 1 / Spongy), (Compact + Spongy) / 2)]);

    [Theory]
    [InlineData(1)]
    [InlineData(4)]
    [InlineData(15)]
    public void Stack_OfThinLayers_ConvergesToTheAnisotropicLayerWithSecondOrder(int n)
    {
        double limit = new LayerTransfer(Laminate()).Coefficient(n);
        double[] errors = [.. new[] { 8, 16, 32, 64 }.Select(pairs => Math.Abs(new LayerTransfer(Stack(pairs)).Coefficient(n) / limit - 1))];
        for (int k = 1; k < errors.Length; k++)
        {
            Assert.InRange(Math.Log2(errors[k - 1] / errors[k]), 1.9, 2.1);
        }

        Assert.InRange(errors[^1], 0, 2e-4);
    }

    [Fact]
    public void Coefficient_OfALayerCutIntoAThousand_IsUnchanged()
    {
        // Rounding of a thousand transfers, each a few units in the last place.
        const double thousandTransfers = 1e-12;
        LayeredSphere whole = Head([new("skull", SkullOutside, 0.01, 0.03)]);
        LayeredSphere cut = Head(Enumerable.Range(1, 1000).Select(k => new SphereLayer("slice", SkullInside + (SkullOutside - SkullInside) * k / 1000, 0.01, 0.03)));
        for (int n = 1; n < 400; n += 7)
        {
            Assert.InRange(Math.Abs(new LayerTransfer(cut).Coefficient(n) / new LayerTransfer(whole).Coefficient(n) - 1), 0, thousandTransfers);
        }
    }
}
