using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Spheres;
using DeepSourceCheck.Core.Sensors;

using MathNet.Numerics.Integration;

namespace DeepSourceCheck.Verification.Spheres;

/// <summary>
/// EEG and MEG kernels against each other: the field of the volume currents follows from the surface potential,
/// B = B_primary - mu0/(4 pi) sigma * integral V n x (r - r')/|r - r'|^3 dS. Source: [Geselowitz 1970].
/// </summary>
public class VolumeCurrentTests
{
    /// <summary>Gauss rule of 64 heights by 128 azimuths: exact to degree 127, where source and sensor have fallen below 1e-13.</summary>
    private const int Heights = 64, Azimuths = 128;

    private const double Radius = 0.09, Conductivity = 0.33, Quadrature = 1e-11;

    [Theory]
    [InlineData(0.0)]
    [InlineData(0.02)]
    [InlineData(0.05)]
    [InlineData(0.065)]
    public void MagneticField_IsThatOfPrimaryCurrentAndSurfacePotential(double depthRadius)
    {
        LayeredSphere head = new("one layer", Vec3.Zero, [new("all", Radius, Conductivity, Conductivity)]);
        Vec3 source = depthRadius * new Vec3(0.36, 0.48, 0.8), moment = new(2e-9, -5e-9, 3e-9);
        GaussLegendreRule rule = new(-1, 1, Heights);
        (Vec3 Normal, double Weight)[] nodes = [.. from i in Enumerable.Range(0, Heights)
                                                   from j in Enumerable.Range(0, Azimuths)
                                                   let z = rule.GetAbscissa(i)
                                                   let s = Math.Sqrt(1 - z * z)
                                                   let phi = 2 * Math.PI * j / Azimuths
                                                   select (new Vec3(s * Math.Cos(phi), s * Math.Sin(phi), z), rule.GetWeight(i) * 2 * Math.PI / Azimuths * Radius * Radius)];
        Electrode[] electrodes = [.. nodes.Select((node, k) => new Electrode($"E{k}", Radius * node.Normal, true, 0))];
        (Vec3 Place, Vec3 Axis)[] sensors = [.. Enumerable.Range(0, 12).Select(k => (0.112 * GoldenSpiral.Point(k, 12), GoldenSpiral.Point(11 - k, 12)))];
        MegChannel[] channels = [.. sensors.Select((s, k) => new MegChannel($"M{k}", CoilKind.Magnetometer, [new(s.Place, s.Axis, 1)]))];

        SphereLeadfield leadfield = new(head, electrodes, channels);
        LeadfieldBlock block = new(leadfield.EegRows, leadfield.MegRows);
        block.Load([source], default);
        leadfield.Fill(block);
        double Response(double[] values, int row) => Vec3.Dot(moment, new(
            values[LeadfieldBlock.At(row, 0)], values[LeadfieldBlock.At(row, 1)], values[LeadfieldBlock.At(row, 2)]));

        double[] potential = [.. Enumerable.Range(0, electrodes.Length).Select(row => Response(block.Eeg, row))];
        double largest = 0, worst = 0;
        for (int m = 0; m < sensors.Length; m++)
        {
            (Vec3 place, Vec3 axis) = sensors[m];
            Vec3 a = place - source;
            Vec3 primary = 1e-7 / (a.Norm * a.Norm * a.Norm) * Vec3.Cross(moment, a), volume = Vec3.Zero;
            for (int k = 0; k < nodes.Length; k++)
            {
                Vec3 r = place - Radius * nodes[k].Normal;
                volume += nodes[k].Weight * potential[k] / (r.Norm * r.Norm * r.Norm) * Vec3.Cross(nodes[k].Normal, r);
            }

            double expected = Vec3.Dot(primary - 1e-7 * Conductivity * volume, axis);
            largest = Math.Max(largest, Math.Abs(Vec3.Dot(primary, axis)));
            worst = Math.Max(worst, Math.Abs(expected - Response(block.Meg, m)));
        }

        // Against the primary field: at the centre the two parts cancel completely.
        Assert.InRange(worst, 0, Quadrature * largest);
    }
}
