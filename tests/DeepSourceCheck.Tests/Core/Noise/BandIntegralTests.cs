using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Tests.Support;

using MathNet.Numerics.Integration;

namespace DeepSourceCheck.Tests.Core.Noise;

public sealed class BandIntegralTests
{
    // A break point that two tables share ends an empty piece. Twenty points are exact for power laws to rounding; a sum of a few hundred terms.
    private const double Rounding = 1e-12;

    [Fact]
    public void Nodes_OfOnePiece_AreThoseOfGaussLegendreInLogFrequency()
    {
        // Abscissas and weights of the rule from a numerical library, bit for bit.
        var rule = new GaussLegendreRule(-1, 1, 20);
        IReadOnlyList<BandNode> nodes = BandIntegral.Nodes(10, 30, []);
        double a = Math.Log(10), half = 0.5 * (Math.Log(30) - Math.Log(10));
        Assert.Equal(rule.Abscissas.Select(x => Math.Exp(a + half * (1 + x))), nodes.Select(n => n.Frequency));
        Assert.Equal(rule.Weights.Select((w, k) => half * w * nodes[k].Frequency), nodes.Select(n => n.Weight));
    }

    [Theory]
    [InlineData(1, 100, new double[] { 40, 10, 3000, 10, 0.5 })]
    [InlineData(0, 50, new double[] { 7 })]
    [InlineData(100, 100.5, new double[0])]
    public void PowerLaw_WithBreakpointsInAnyOrder_IsItsClosedForm(double low, double high, double[] breakpoints)
    {
        double from = Math.Max(low, high * 1e-6);
        RelativeAssert.Equal(2 * (Math.Sqrt(high) - Math.Sqrt(from)), BandIntegral.Of(f => 1 / Math.Sqrt(f), low, high, breakpoints), Rounding, "f^-1/2");
        RelativeAssert.Equal(Math.Log(high / from), BandIntegral.Of(f => 1 / f, low, high, breakpoints), Rounding, "1/f");
        double last = from;
        foreach (BandNode node in BandIntegral.Nodes(low, high, breakpoints))
        {
            Assert.True(node.Frequency > last * (1 - Rounding) && node.Frequency < high && node.Weight >= 0, $"{node} follows {last}");
            last = node.Frequency;
        }
    }
}
