using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Heads.Voxels;

// The share of a voxel that belongs to a surface is 1 or 0 at its centre and trilinear between centres; outlines are its level lines at one half on a plane of nodes. Scalp and
// brain are shown by their outer borders, bone by both sides. The brain's share is smoothed first: folds are not what the picture is for.

/// <summary>Outlines of scalp, bone and brain on the three planes through a point.</summary>
public static class HeadSections
{
    /// <summary>Standard deviation to which the brain is smoothed [m].</summary>
    public const double BrainSmoothing = 0.004;

    // Nodes lie half a voxel apart, at least this [m]: finer than a line is drawn.
    private const double LeastSpacing = 0.001;

    // What encloses less is a speck [m^2].
    private const double LeastArea = 25e-6;

    // Largest distance by which a line is simplified [m].
    private const double Tolerance = 0.0003;

    private const int SmoothingPasses = 6;

    /// <summary>The outlines; of a surface that a plane does not meet there is none.</summary>
    /// <param name="volume">Head.</param>
    /// <param name="through">Point that the planes pass through [m].</param>
    public static IReadOnlyList<HeadOutline> Of(TissueVolume volume, Vec3 through) =>
    [
        .. Surface(volume, through, "scalp", kind => kind != TissueKind.Air, 0, holes: false),
        .. Surface(volume, through, "bone", kind => kind == TissueKind.Skull, 0, holes: true),
        .. Surface(volume, through, "brain", kind => kind is TissueKind.Grey or TissueKind.White, BrainSmoothing, holes: false),
    ];

    private static IEnumerable<HeadOutline> Surface(TissueVolume volume, Vec3 through, string name, Func<TissueKind, bool> belongs, double smoothing, bool holes)
    {
        float[] share = [.. volume.Tissues.Select(t => belongs(t.Kind) ? 1f : 0f)];
        var values = new float[volume.Grid.Count];
        ReadOnlySpan<byte> cells = volume.Cells;
        for (int at = 0; at < values.Length; at++)
        {
            values[at] = share[cells[at]];
        }

        if (smoothing > 0)
        {
            BoxBlur.Smooth(volume.Grid, values, smoothing);
        }

        var field = new ScalarField(volume.Grid, values);
        return [.. Enumerable.Range(0, 3).Select(axis => new HeadOutline(name, axis, Cut(field, through, axis, holes))).Where(o => o.Lines.Count > 0)];
    }

    private static IReadOnlyList<IReadOnlyList<Vec3>> Cut(ScalarField field, Vec3 through, int axis, bool holes)
    {
        (Vec3 low, Vec3 high) = field.Grid.WorldBounds();
        double spacing = Math.Max(LeastSpacing, Math.Cbrt(field.Grid.VoxelVolume) / 2);
        (double u0, double v0) = Flat(low, axis);
        (double u1, double v1) = Flat(high, axis);
        int nu = (int)Math.Ceiling((u1 - u0) / spacing) + 1, nv = (int)Math.Ceiling((v1 - v0) / spacing) + 1;
        var values = new double[nu * nv];
        for (int v = 0; v < nv; v++)
        {
            for (int u = 0; u < nu; u++)
            {
                values[u + nu * v] = field.At(Raised(u0 + spacing * u, v0 + spacing * v, through, axis));
            }
        }

        return
        [
            .. LevelLines.Of(values, nu, nv, 0.5)
                .Where(line => Math.Abs(PlaneLine.Area(line)) * spacing * spacing >= LeastArea && (holes || PlaneLine.Area(line) > 0))
                .Select(line => PlaneLine.Simplified(PlaneLine.Smoothed(line, SmoothingPasses), Tolerance / spacing))
                .Select(line => (IReadOnlyList<Vec3>)[.. line.Select(p => Raised(u0 + spacing * p.X, v0 + spacing * p.Y, through, axis))]),
        ];
    }

    private static (double U, double V) Flat(Vec3 p, int axis) => axis switch { 0 => (p.Y, p.Z), 1 => (p.X, p.Z), _ => (p.X, p.Y) };

    private static Vec3 Raised(double u, double v, Vec3 through, int axis) => axis switch { 0 => new(through.X, u, v), 1 => new(u, through.Y, v), _ => new(u, v, through.Z) };
}
