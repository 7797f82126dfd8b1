using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Spheres;
using DeepSourceCheck.Core.Leadfields.Voxels;
using DeepSourceCheck.Core.Sensors;

namespace DeepSourceCheck.Verification.Voxels;

/// <summary>
/// A layered sphere as a label volume, solved through the whole chain of the voxel head, beside the analytic series and closed form. 100 electrodes, 60 radial and 60 tangential
/// magnetometers 20 mm off the scalp. A voxel has the tissue of its centre.
/// </summary>
internal sealed class VoxelSphere
{
    /// <summary>Dipoles at each eccentricity, evenly over directions.</summary>
    public const int Dipoles = 24;

    private const double BrainRadius = 0.078;

    private readonly LayeredSphere _head;
    private readonly Electrode[] _electrodes;
    private readonly MegChannel[] _channels;
    private readonly SourceTissue _tissue;
    private readonly TransferRows _rows;

    /// <param name="head">Layers, centred at the origin; the innermost is source tissue and isotropic.</param>
    /// <param name="toWorld">Linear part of the voxels' map; they are centred at the origin.</param>
    /// <param name="adapted">True for moved nodes.</param>
    /// <param name="eccentricities">Where alone errors will be asked for, of monopoles: rows of other nodes are not kept. Null: anywhere.</param>
    public VoxelSphere(LayeredSphere head, Affine toWorld, bool adapted, IReadOnlyList<double>? eccentricities = null)
    {
        _head = head;
        (TissueVolume volume, ConductivityTensors? tensors) = Voxels(head, toWorld);
        HexMesh mesh = adapted ? AdaptedNodes.Adapt(HexMesh.Plain(volume)) : HexMesh.Plain(volume);
        _electrodes = [.. Enumerable.Range(0, 100).Select(k => new Electrode($"E{k}", head.OuterRadius * GoldenSpiral.Point(k, 100, -0.5), true, 0))];
        _channels = [.. Enumerable.Range(0, 120).Select(k =>
        {
            Vec3 up = GoldenSpiral.Point(k % 60, 60, -0.3);
            return new MegChannel($"M{k}", CoilKind.Magnetometer, [new((head.OuterRadius + 0.02) * up, k < 60 ? up : Vec3.Cross(up, new(0.3, 0.5, -0.8)).Unit(), 1)]);
        })];
        _tissue = new(mesh);
        SensorLoads loads = new(new(mesh, _electrodes), new(mesh, _channels, tensors));
        KeptNodes kept = eccentricities is null ? KeptNodes.All(_tissue)
            : KeptNodes.NeededBy(DipoleLoad.Of(DipoleLoadKind.Monopoles, _tissue), eccentricities.SelectMany(Places).Where(Admitted));
        _rows = new(kept, _electrodes.Length, _channels.Length);
        new VoxelSolver(mesh, tensors, null, 2).Solve(loads, _rows.Take, 2);
    }

    /// <summary>Radii 78/80/86/92 mm, 0.33/1.79/0.01/0.43 S/m: a common standard of the literature.</summary>
    public static LayeredSphere Standard { get; } = Head(0.01, 0.01);

    public static LayeredSphere Head(double skullRadial, double skullTangential) => new("layered", Vec3.Zero,
    [
        new("brain", BrainRadius, 0.33, 0.33), new("csf", 0.080, 1.79, 1.79), new("skull", 0.086, skullRadial, skullTangential), new("scalp", 0.092, 0.43, 0.43),
    ]);

    /// <summary>Cubic voxels along the axes.</summary>
    public static Affine Cubic(double mm) => new(new(mm / 1000, 0, 0), new(0, mm / 1000, 0), new(0, 0, mm / 1000), Vec3.Zero);

    /// <summary>Errors at an eccentricity: share of the brain's radius.</summary>
    public Errors At(double eccentricity, DipoleLoadKind kind)
    {
        VoxelLeadfield voxels = new(_rows, DipoleLoad.Of(kind, _tissue), _channels);
        SphereLeadfield sphere = new(_head, _electrodes, _channels);
        LeadfieldBlock actual = new(voxels.EegRows, voxels.MegRows), exact = new(voxels.EegRows, voxels.MegRows);
        List<double> rdmTangential = [], lnTangential = [], rdmRadial = [], lnRadial = [], meg = [];
        for (int d = 0; d < Dipoles; d++)
        {
            Vec3 radial = GoldenSpiral.Point(d, Dipoles, -1), position = eccentricity * BrainRadius * radial;
            if (!Admitted(position))
            {
                continue;
            }

            Vec3 tangential = Vec3.Cross(radial, Math.Abs(radial.Z) < 0.9 ? new(0, 0, 1) : new(1, 0, 0)).Unit();
            actual.Load([position], default);
            exact.Load([position], default);
            voxels.Fill(actual);
            sphere.Fill(exact);
            (double rdm, double ln) = Topography(Field(exact.Eeg, tangential), Field(actual.Eeg, tangential));
            rdmTangential.Add(rdm);
            lnTangential.Add(ln);
            (rdm, ln) = Topography(Field(exact.Eeg, radial), Field(actual.Eeg, radial));
            rdmRadial.Add(rdm);
            lnRadial.Add(ln);
            double[] wanted = Field(exact.Meg, tangential), got = Field(actual.Meg, tangential);
            meg.Add(Norm([.. wanted.Zip(got, (a, b) => b - a)]) / Norm(wanted));
        }

        return new(rdmTangential.Count, Median(rdmTangential), Median(lnTangential), Median(rdmRadial), Median(lnRadial), Median(meg), High(rdmTangential), High(rdmRadial), High(meg));
    }

    private static IEnumerable<Vec3> Places(double eccentricity) => Enumerable.Range(0, Dipoles).Select(d => eccentricity * BrainRadius * GoldenSpiral.Point(d, Dipoles, -1));

    // Else the voxel that holds the place has its centre in the CSF.
    private bool Admitted(Vec3 position) => SourceTissue.Admits(_tissue.Mesh.Volume.At(position).Kind);

    private static (TissueVolume Volume, ConductivityTensors? Tensors) Voxels(LayeredSphere head, Affine toWorld)
    {
        double least = Math.Min(toWorld.Column(0).Norm, Math.Min(toWorld.Column(1).Norm, toWorld.Column(2).Norm));
        int n = 2 * (int)Math.Ceiling(1.15 * head.OuterRadius / least) + 2;
        Affine centred = toWorld with { Offset = toWorld.ApplyLinear(new(-(n - 1) / 2.0, -(n - 1) / 2.0, -(n - 1) / 2.0)) };
        VoxelGrid grid = new(n, n, n, centred);
        var cells = new byte[grid.Count];
        var has = new ulong[(grid.Count + 63) / 64];
        List<float> values = [];
        for (int cell = 0; cell < cells.Length; cell++)
        {
            (int i, int j, int k) = grid.Voxel(cell);
            Vec3 place = grid.Centre(i, j, k);
            int layer = head.Layers.TakeWhile(l => place.Norm > l.OuterRadius).Count();
            cells[cell] = (byte)(layer == head.Layers.Count ? 0 : layer + 1);
            if (layer < head.Layers.Count && head.Layers[layer] is var l && l.RadialConductivity != l.TangentialConductivity)
            {
                has[cell >> 6] |= 1UL << cell;
                Vec3 u = place.Unit();
                double t = l.TangentialConductivity, more = l.RadialConductivity - t;
                values.AddRange([(float)(t + more * u.X * u.X), (float)(more * u.X * u.Y), (float)(t + more * u.Y * u.Y), (float)(more * u.X * u.Z), (float)(more * u.Y * u.Z), (float)(t + more * u.Z * u.Z)]);
            }
        }

        TissueKind[] kinds = [TissueKind.Grey, TissueKind.Csf, TissueKind.Skull, TissueKind.Scalp];
        Tissue[] tissues = [new(0, "air", TissueKind.Air, 0), .. head.Layers.Select((l, n) => new Tissue(n + 1, l.Tissue, kinds[n], l.TangentialConductivity))];
        return (new(grid, cells, tissues), values.Count > 0 ? new(has, [.. values]) : null);
    }

    private static double[] Field(double[] block, Vec3 moment) =>
        [.. Enumerable.Range(0, block.Length / 24).Select(row => block[row * 24] * moment.X + block[row * 24 + 8] * moment.Y + block[row * 24 + 16] * moment.Z)];

    // RDM = |a/|a| - b/|b||, lnMAG = ln(|b|/|a|), both against the average of the electrodes [Meijs and others 1989].
    private static (double Rdm, double LnMag) Topography(double[] exact, double[] actual)
    {
        double[] a = [.. exact.Select(v => v - exact.Average())], b = [.. actual.Select(v => v - actual.Average())];
        double na = Norm(a), nb = Norm(b);
        return (Norm([.. a.Zip(b, (x, y) => x / na - y / nb)]), Math.Log(nb / na));
    }

    private static double Norm(double[] x) => Math.Sqrt(x.Sum(v => v * v));

    private static double Median(List<double> x)
    {
        double[] sorted = [.. x.Order()];
        return (sorted[(sorted.Length - 1) / 2] + sorted[sorted.Length / 2]) / 2;
    }

    private static double High(List<double> x) => x.Order().ElementAt((int)(0.95 * (x.Count - 1)));

    /// <summary>Medians, and 95th percentiles (High), over dipoles.</summary>
    public sealed record Errors(
        int Count, double RdmTangential, double LnMagTangential, double RdmRadial, double LnMagRadial, double Meg, double RdmTangentialHigh, double RdmRadialHigh, double MegHigh)
    {
        public override string ToString() => FormattableString.Invariant(
            $"{Count} dipoles: tangential RDM {RdmTangential:0.000} (95 %: {RdmTangentialHigh:0.000}) lnMAG {LnMagTangential:+0.000;-0.000}, radial RDM {RdmRadial:0.000} (95 %: {RdmRadialHigh:0.000}) lnMAG {LnMagRadial:+0.000;-0.000}, MEG {Meg:0.0000} (95 %: {MegHigh:0.0000})");
    }
}
