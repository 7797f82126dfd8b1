using System.Text.Json;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Spheres;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Leadfields;

/// <summary>Heads, sensors and whole leadfields for the tests of spheres.</summary>
internal static class SphereLeadfields
{
    /// <summary>The adult head of the contract: radii 78/80/86/92 mm, 0.33/1.79/0.0132/0.43 S/m, off the origin.</summary>
    public static LayeredSphere Adult { get; } = Isotropic(new(0, -0.018, 0.005), (0.078, 0.33), (0.080, 1.79), (0.086, 0.0132), (0.092, 0.43));

    public static LayeredSphere Isotropic(Vec3 centre, params (double Radius, double Conductivity)[] layers) =>
        new("test", centre, [.. layers.Select((l, k) => new SphereLayer($"layer {k + 1}", l.Radius, l.Conductivity, l.Conductivity))]);

    public static LayeredSphere Anisotropic(Vec3 centre, params (double Radius, double Radial, double Tangential)[] layers) =>
        new("test", centre, [.. layers.Select((l, k) => new SphereLayer($"layer {k + 1}", l.Radius, l.Radial, l.Tangential))]);

    /// <summary>Electrodes at given places [m].</summary>
    public static Electrode[] Electrodes(IEnumerable<Vec3> places) => [.. places.Select((p, k) => new Electrode($"E{k + 1}", p, true, 0))];

    /// <summary>Electrodes evenly over a head's surface above a height of its unit sphere.</summary>
    public static Electrode[] Electrodes(LayeredSphere head, int count, double lowest = -0.5) =>
        Electrodes(Enumerable.Range(0, count).Select(k => head.Centre + head.OuterRadius * GoldenSpiral.Point(k, count, lowest)));

    /// <summary>Axial gradiometers of 50 mm over a head at a gap of 20 mm, tilted by up to 0.3 rad, and for every third a tangential baseline.</summary>
    public static MegChannel[] Coils(LayeredSphere head, int count)
    {
        MegChannel[] channels = new MegChannel[count];
        for (int k = 0; k < count; k++)
        {
            Vec3 up = GoldenSpiral.Point(k, count, -0.4);
            Vec3 across = Vec3.Cross(up, new(0.3, 0.5, -0.8)).Unit();
            Vec3 axis = (up + 0.3 * Math.Sin(k) * across).Unit();
            Vec3 site = head.Centre + (head.OuterRadius + 0.02) * up;
            channels[k] = k % 3 == 0
                ? new MegChannel($"P{k}", CoilKind.PlanarGradiometer, [new(site + 0.0075 * across, axis, 1 / 0.015), new(site - 0.0075 * across, axis, -1 / 0.015)])
                : new MegChannel($"A{k}", CoilKind.AxialGradiometer, [new(site, axis, 1), new(site + 0.05 * axis, axis, -1)]);
        }

        return channels;
    }

    /// <summary>Leadfields as [dipole][row * 3 + axis], through blocks.</summary>
    public static (double[][] Eeg, double[][] Meg) Compute(
        LayeredSphere head, IReadOnlyList<Vec3> positions, IReadOnlyList<Electrode> electrodes, IReadOnlyList<MegChannel> channels)
    {
        SphereLeadfield source = new(head, electrodes, channels);
        LeadfieldBlock block = new(source.EegRows, source.MegRows);
        double[][] eeg = new double[positions.Count][], meg = new double[positions.Count][];
        for (int first = 0; first < positions.Count; first += LeadfieldBlock.Lanes)
        {
            Vec3[] some = [.. positions.Skip(first).Take(LeadfieldBlock.Lanes)];
            block.Load(some, default);
            source.Fill(block);
            for (int lane = 0; lane < some.Length; lane++)
            {
                eeg[first + lane] = Lane(block.Eeg, lane);
                meg[first + lane] = Lane(block.Meg, lane);
            }
        }

        return (eeg, meg);
    }

    public static double[][] Eeg(LayeredSphere head, IReadOnlyList<Vec3> positions, IReadOnlyList<Electrode> electrodes) =>
        Compute(head, positions, electrodes, []).Eeg;

    public static double[][] Meg(LayeredSphere head, IReadOnlyList<Vec3> positions, IReadOnlyList<MegChannel> channels) =>
        Compute(head, positions, [], channels).Meg;

    /// <summary>Values of one lane in the order [row][axis].</summary>
    public static double[] Lane(double[] values, int lane) =>
        [.. Enumerable.Range(0, values.Length / LeadfieldBlock.Lanes).Select(k => values[k * LeadfieldBlock.Lanes + lane])];

    /// <summary>Vectors in a row.</summary>
    public static double[] Flat(this IEnumerable<Vec3> vectors) => [.. vectors.SelectMany(v => new[] { v.X, v.Y, v.Z })];

    /// <summary>Leadfield after the mean over all electrodes is taken from every axis.</summary>
    public static double[] AverageReferenced(double[] leadfield)
    {
        int rows = leadfield.Length / 3;
        double[] mean = [.. Enumerable.Range(0, 3).Select(axis => Enumerable.Range(0, rows).Sum(row => leadfield[row * 3 + axis]) / rows)];
        return [.. leadfield.Select((value, k) => value - mean[k % 3])];
    }

    /// <summary>Potential or field of a moment: [row].</summary>
    public static double[] Times(double[] leadfield, Vec3 moment) =>
        [.. Enumerable.Range(0, leadfield.Length / 3).Select(row => leadfield[row * 3] * moment.X + leadfield[row * 3 + 1] * moment.Y + leadfield[row * 3 + 2] * moment.Z)];

    /// <summary>A list of points of a reference case.</summary>
    public static Vec3[] Points(this JsonElement element) =>
        [.. element.EnumerateArray().Select(p => p.Numbers()).Select(p => new Vec3(p[0], p[1], p[2]))];

    /// <summary>Channels of a reference case.</summary>
    public static MegChannel[] Channels(JsonElement inputs, CoilKind kind)
    {
        JsonElement places = inputs.GetProperty("point_position_m"), axes = inputs.GetProperty("point_direction"), shares = inputs.GetProperty("point_weight");
        return [.. Enumerable.Range(0, places.GetArrayLength()).Select(k =>
        {
            Vec3[] place = places[k].Points(), axis = axes[k].Points();
            double[] share = shares[k].Numbers();
            return new MegChannel($"C{k + 1}", kind, [.. place.Select((p, i) => new CoilPoint(p, axis[i], share[i]))]);
        })];
    }
}
