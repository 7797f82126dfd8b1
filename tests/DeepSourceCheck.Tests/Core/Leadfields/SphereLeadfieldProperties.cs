using CsCheck;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Leadfields;

/// <summary>Symmetries and scalings that hold for any head, dipole and sensor.</summary>
public class SphereLeadfieldProperties
{
    /// <summary>Rounded rotations and the tail of the series.</summary>
    private const double Symmetry = 1e-11;

    private static readonly Gen<Vec3> Directions =
        from x in Gen.Double[-1, 1]
        from y in Gen.Double[-1, 1]
        from z in Gen.Double[0.1, 1]
        select new Vec3(x, y, z).Unit();

    private static readonly Gen<Rotation> Rotations =
        from x in Gen.Double[-3, 3]
        from y in Gen.Double[-3, 3]
        from z in Gen.Double[-3, 3]
        select Rotation.FromFixedAxes(x, y, z);

    /// <summary>Heads of one to five layers, isotropic or not outside the innermost.</summary>
    private static readonly Gen<LayeredSphere> Heads =
        from count in Gen.Int[1, 5]
        from radius in Gen.Double[0.04, 0.1]
        from steps in Gen.Double[0.001, 0.01].Array[5]
        from radial in Gen.Double[-2.5, 0.5].Array[5]
        from ratio in Gen.Double[-1, 1].Array[5]
        from x in Gen.Double[-0.05, 0.05]
        select new LayeredSphere("random", new(x, -x, 0.5 * x), [.. Enumerable.Range(0, count).Select(k =>
            new SphereLayer($"layer {k}", radius + (k == 0 ? 0 : steps[..k].Sum()), Math.Pow(10, radial[k]), Math.Pow(10, radial[k] + (k == 0 ? 0 : ratio[k]))))]);

    /// <summary>From 0.4 mm: nearer, the rounding of a position in an off-centre frame alone exceeds the tolerance in MEG.</summary>
    private static readonly Gen<double> Eccentricities = Gen.Double[0.01, 0.95];

    private static MegChannel Turned(MegChannel channel, Vec3 centre, Rotation rotation) => channel with
    {
        Points = [.. channel.Points.Select(p => new CoilPoint(centre + rotation.Apply(p.Position - centre), rotation.Apply(p.Axis), p.Share))],
    };

    [Fact]
    public void Leadfields_WhenAllRotateTogether_RotateWithThem() =>
        Gen.Select(Heads, Directions, Eccentricities, Rotations).Sample((head, direction, eccentricity, rotation) =>
        {
            Vec3 c = head.Centre, offset = eccentricity * head.InnerRadius * direction;
            Electrode[] electrodes = SphereLeadfields.Electrodes(head, 6);
            MegChannel[] channels = SphereLeadfields.Coils(head, 6);
            (double[][] eeg, double[][] meg) = SphereLeadfields.Compute(head, [c + offset], electrodes, channels);
            (double[][] eegTurned, double[][] megTurned) = SphereLeadfields.Compute(head, [c + rotation.Apply(offset)],
                [.. electrodes.Select(e => e with { Position = c + rotation.Apply(e.Position - c) })], [.. channels.Select(k => Turned(k, c, rotation))]);
            RelativeAssert.Close(Turn(eeg[0], rotation), eegTurned[0], Symmetry, "EEG");
            for (int row = 0; row < channels.Length; row++)
            {
                // Row by row: planar and axial gradiometers have different units.
                RelativeAssert.Close(Turn(meg[0], rotation).AsSpan(3 * row, 3), megTurned[0].AsSpan(3 * row, 3), 1e-9, "MEG");
            }
        }, iter: 200);

    [Fact]
    public void Potential_ScalesWithOneOverConductivityTimesLengthSquared_AndFieldWithOneOverLengthSquared() =>
        Gen.Select(Heads, Directions, Eccentricities, Gen.Double[0.3, 3], Gen.Double[0.1, 10]).Sample((head, direction, eccentricity, length, conductivity) =>
        {
            LayeredSphere scaled = new("scaled", length * head.Centre, [.. head.Layers.Select(l => new SphereLayer(
                l.Tissue, length * l.OuterRadius, conductivity * l.RadialConductivity, conductivity * l.TangentialConductivity))]);
            Vec3 offset = eccentricity * head.InnerRadius * direction;
            Electrode[] electrodes = SphereLeadfields.Electrodes(head, 6);
            MegChannel[] channels = [.. SphereLeadfields.Coils(head, 9).Where(k => k.Kind == CoilKind.AxialGradiometer)];
            (double[][] eeg, double[][] meg) = SphereLeadfields.Compute(head, [head.Centre + offset], electrodes, channels);
            (double[][] eegScaled, double[][] megScaled) = SphereLeadfields.Compute(scaled, [length * (head.Centre + offset)],
                [.. electrodes.Select(e => e with { Position = length * e.Position })],
                [.. channels.Select(k => k with { Points = [.. k.Points.Select(p => p with { Position = length * p.Position })] })]);
            RelativeAssert.Close(eeg[0], [.. eegScaled[0].Select(v => v * conductivity * length * length)], Symmetry, "EEG");
            RelativeAssert.Close(meg[0], [.. megScaled[0].Select(v => v * length * length)], Symmetry, "MEG");
        }, iter: 200);

    [Fact]
    public void RadialDipole_IsSilentInMeg() => Gen.Select(Heads, Directions, Eccentricities).Sample((head, direction, eccentricity) =>
    {
        Vec3 position = head.Centre + eccentricity * head.InnerRadius * direction, radial = position - head.Centre;
        double[] meg = SphereLeadfields.Meg(head, [position], SphereLeadfields.Coils(head, 6))[0];
        double[] field = SphereLeadfields.Times(meg, radial);
        for (int row = 0; row < field.Length; row++)
        {
            double size = new Vec3(meg[3 * row], meg[3 * row + 1], meg[3 * row + 2]).Norm;
            Assert.True(Math.Abs(field[row]) <= 1e-15 * size * radial.Norm);
        }
    }, iter: 200);

    [Fact]
    public void Leadfield_OfAnElectrodePair_IsAFieldWithoutCurlAndDivergence() =>
        Gen.Select(Heads, Directions, Gen.Double[0.05, 0.9]).Sample((head, direction, eccentricity) =>
        {
            // By reciprocity the leadfield of an electrode pair is the field that unit current through the pair drives at the dipole: it is free of curl and, where the
            // innermost layer is isotropic, of divergence. Central differences of 10 um leave (10 um/depth)^2 and rounding.
            const double step = 1e-5, differencing = 2e-4;
            Vec3 position = head.Centre + eccentricity * head.InnerRadius * direction;
            Electrode[] pair = SphereLeadfields.Electrodes(head, 2);
            Vec3[] axes = [new(1, 0, 0), new(0, 1, 0), new(0, 0, 1)];
            Vec3[] around = [.. axes.SelectMany(a => new[] { position + step * a, position - step * a })];
            double[][] leadfield = SphereLeadfields.Eeg(head, around, pair);
            double Slope(int a, int b) => (leadfield[2 * a][b] - leadfield[2 * a][3 + b] - leadfield[2 * a + 1][b] + leadfield[2 * a + 1][3 + b]) / (2 * step);
            double size = leadfield.SelectMany(v => v).Max(Math.Abs), allowed = differencing * size / head.OuterRadius;
            for (int a = 0; a < 3; a++)
            {
                Assert.InRange(Math.Abs(Slope(a, (a + 1) % 3) - Slope((a + 1) % 3, a)), 0, allowed);
            }

            Assert.InRange(Math.Abs(Slope(0, 0) + Slope(1, 1) + Slope(2, 2)), 0, allowed);
        }, iter: 200);

    [Fact]
    public void Potential_OverTheWholeSphere_HasMeanZero() => Gen.Select(Heads, Directions, Gen.Double[0, 0.5]).Sample((head, direction, eccentricity) =>
    {
        // An even lattice integrates the low degrees of a deep source; what is left falls with the number of points.
        Electrode[] electrodes = SphereLeadfields.Electrodes(head, 4000, -1);
        double[] leadfield = SphereLeadfields.Eeg(head, [head.Centre + eccentricity * head.InnerRadius * direction], electrodes)[0];
        for (int axis = 0; axis < 3; axis++)
        {
            double mean = Enumerable.Range(0, 4000).Sum(row => leadfield[row * 3 + axis]) / 4000;
            Assert.InRange(Math.Abs(mean), 0, 3e-4 * leadfield.Max(Math.Abs));
        }
    }, iter: 20);

    private static double[] Turn(double[] leadfield, Rotation rotation) =>
        [.. leadfield.Chunk(3).Select(v => rotation.Apply(new(v[0], v[1], v[2]))).Flat()];
}
