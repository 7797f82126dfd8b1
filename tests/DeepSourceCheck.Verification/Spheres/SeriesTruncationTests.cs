using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Spheres;
using DeepSourceCheck.Core.Sensors;

namespace DeepSourceCheck.Verification.Spheres;

/// <summary>Whole leadfields over random heads: the eight dipoles of a block share the degree of the outermost, which must not matter.</summary>
public class SeriesTruncationTests
{
    /// <summary>The tail of 1e-13 and rounding at up to several hundred degrees.</summary>
    private const double Tail = 2e-12;

    [Fact]
    public void Leadfield_WithMoreDegreesThanTheBoundAsksFor_IsUnchanged_Seed20()
    {
        Random random = new(20);
        double worst = 0;
        for (int trial = 0; trial < 300; trial++)
        {
            double radius = 0.05 + 0.04 * random.NextDouble();
            List<SphereLayer> layers = [];
            for (int k = random.Next(1, 6); k > 0; k--)
            {
                double sigma = Math.Pow(10, -3 + 3.5 * random.NextDouble()), tangential = layers.Count == 0 ? sigma : sigma * Math.Pow(10, 2 * random.NextDouble() - 1);
                layers.Add(new("random", radius, sigma, tangential));
                radius += Math.Pow(10, -5 + 3 * random.NextDouble());
            }

            LayeredSphere head = new("random", Vec3.Zero, layers);
            Electrode[] electrodes = [.. Enumerable.Range(0, 16).Select(k => new Electrode($"E{k}", head.OuterRadius * GoldenSpiral.Point(k, 16), true, 0))];
            SphereLeadfield source = new(head, electrodes, []);
            LeadfieldBlock alone = new(16, 0), withShallow = new(16, 0);
            Vec3 deep = 0.9 * random.NextDouble() * head.InnerRadius * GoldenSpiral.Point(random.Next(100), 100);
            alone.Load([deep], default);
            withShallow.Load([deep, new(0, 0, 0.985 * head.InnerRadius)], default);
            source.Fill(alone);
            source.Fill(withShallow);
            double top = 0, difference = 0;
            for (int at = 0; at < alone.Eeg.Length; at += LeadfieldBlock.Lanes)
            {
                top = Math.Max(top, Math.Abs(alone.Eeg[at]));
                difference = Math.Max(difference, Math.Abs(alone.Eeg[at] - withShallow.Eeg[at]));
            }

            worst = Math.Max(worst, difference / top);
        }

        Assert.InRange(worst, 0, Tail);
    }
}
