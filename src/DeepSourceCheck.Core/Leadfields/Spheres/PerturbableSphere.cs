using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Leadfields.Spheres;

/// <summary>A layered sphere whose skull, place in the array and centre are not known.</summary>
/// <remarks>
/// Electrodes lie on the scalp by definition and move with the centre. Coils are moved against the head; one that would enter the scalp is pushed out to <see cref="Clearance"/>, as a
/// sensor that rests on it would be. A source that a moved centre would put beyond the innermost layer is drawn back to its admitted part.
/// </remarks>
public sealed class PerturbableSphere : IPerturbableHead
{
    /// <summary>Least distance of a coil from the scalp [m].</summary>
    public const double Clearance = 0.001;

    private readonly LayeredSphere _head;
    private readonly IReadOnlyList<Electrode> _electrodes;
    private readonly IReadOnlyList<MegChannel> _channels;
    private readonly CoilArrayChoice? _array;

    /// <param name="head">Nominal head.</param>
    /// <param name="electrodes">Electrodes on its scalp.</param>
    /// <param name="channels">MEG channels about it.</param>
    /// <param name="array">What a generated array was generated from; null for a table of coils.</param>
    public PerturbableSphere(LayeredSphere head, IReadOnlyList<Electrode> electrodes, IReadOnlyList<MegChannel> channels, CoilArrayChoice? array)
    {
        _head = head;
        _electrodes = electrodes;
        _channels = channels;
        _array = array;
        SkullRatio = Heads.SkullRatio.Of(head);
    }

    /// <inheritdoc/>
    public double? SkullRatio { get; }

    /// <inheritdoc/>
    public double? Gap => _array?.Gap;

    /// <inheritdoc/>
    public ILeadfieldSource Perturbed(HeadPerturbation perturbation)
    {
        LayeredSphere layers = perturbation.SkullRatio is { } ratio && SkullRatio is not null ? Heads.SkullRatio.With(_head, ratio) : _head;
        var head = new LayeredSphere(layers.Name, layers.Centre + perturbation.CentreShift, layers.Layers);
        Electrode[] electrodes = [.. _electrodes.Select(e => e with { Position = e.Position + perturbation.CentreShift })];
        IReadOnlyList<MegChannel> channels = perturbation.Gap is { } gap && _array is not null
            ? CoilArray.Generate(_array with { Gap = gap }, _head.Centre, _head.OuterRadius) : _channels;
        return new Source(head, new SphereLeadfield(head, electrodes, [.. channels.Select(c => Moved(c, perturbation.HeadShift, head))]));
    }

    private static MegChannel Moved(MegChannel channel, Vec3 headShift, LayeredSphere head) => channel with
    {
        Points = [.. channel.Points.Select(p => p with { Position = Outside(p.Position - headShift, head) })],
    };

    private static Vec3 Outside(Vec3 point, LayeredSphere head)
    {
        Vec3 r = point - head.Centre;
        double least = head.OuterRadius + Clearance;
        return r.Norm >= least ? point : head.Centre + least * r.Unit();
    }

    private sealed class Source(LayeredSphere head, SphereLeadfield inner) : ILeadfieldSource
    {
        public int EegRows => inner.EegRows;

        public int MegRows => inner.MegRows;

        public LeadfieldMethod Method => inner.Method;

        public void Fill(LeadfieldBlock block)
        {
            double limit = LayeredSphere.LargestEccentricity * head.InnerRadius;
            Span<Vec3> positions = stackalloc Vec3[LeadfieldBlock.Lanes];
            bool moved = false;
            for (int lane = 0; lane < LeadfieldBlock.Lanes; lane++)
            {
                Vec3 r = block.Positions[lane] - head.Centre;
                bool beyond = r.Norm > limit;
                positions[lane] = beyond ? head.Centre + limit * r.Unit() : block.Positions[lane];
                moved |= beyond;
            }

            if (moved)
            {
                block.Load(positions[..block.Count], default);
            }

            inner.Fill(block);
        }
    }
}
