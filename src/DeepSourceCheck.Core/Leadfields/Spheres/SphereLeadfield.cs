using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Leadfields.Spheres;

/// <summary>EEG and MEG leadfields of a layered sphere. Either list of sensors may be empty.</summary>
public sealed class SphereLeadfield : ILeadfieldSource
{
    /// <summary>Room for the rounding of a position at the limit itself.</summary>
    private const double Rounding = 1e-9;

    private readonly LayeredSphere _head;
    private readonly EegLayerSeries? _eeg;
    private readonly MegSphere? _meg;

    /// <summary>Prepares the tables of a head and its sensors.</summary>
    /// <param name="head">Head; sources stand in its innermost layer.</param>
    /// <param name="electrodes">Electrodes, reduced to their direction from the centre.</param>
    /// <param name="channels">MEG channels, every coil point outside the head.</param>
    /// <exception cref="InputException">A coil point lies in the head.</exception>
    /// <exception cref="ArgumentException">A layer is impossible, or an electrode stands at the centre.</exception>
    public SphereLeadfield(LayeredSphere head, IReadOnlyList<Electrode> electrodes, IReadOnlyList<MegChannel> channels)
    {
        CheckCoils(head, channels);
        _head = head;
        _eeg = electrodes.Count > 0 ? new EegLayerSeries(head, electrodes) : null;
        _meg = channels.Count > 0 ? new MegSphere(head.Centre, channels) : null;
    }

    /// <inheritdoc/>
    public int EegRows => _eeg?.Rows ?? 0;

    /// <inheritdoc/>
    public int MegRows => _meg?.Rows ?? 0;

    /// <inheritdoc/>
    public double? PositionStep => 1e-5;

    /// <inheritdoc/>
    public LeadfieldMethod Method { get; } = new(
        "EEG leadfield: series of the layered sphere, de Munck and Peters 1993, Zhang 1995", "MEG leadfield: closed form of the sphere, Sarvas 1987");

    /// <summary>Refuses coil points that are not outside the outer sphere.</summary>
    /// <param name="head">Head.</param>
    /// <param name="channels">Channels.</param>
    /// <param name="file">File that the coils come from, or null.</param>
    /// <param name="key">Key of the study that the coils come from, or null.</param>
    /// <exception cref="InputException">Names every such channel once, its nearest point's distance from the centre and the radius.</exception>
    public static void CheckCoils(LayeredSphere head, IReadOnlyList<MegChannel> channels, string? file = null, string? key = null)
    {
        List<InputProblem> problems = [];
        foreach (MegChannel channel in channels)
        {
            if (channel.Points.Count == 0)
            {
                problems.Add(new(file, 0, 0, key, $"channel {channel.Name} has no coil point; give it at least one"));
                continue;
            }

            double nearest = double.PositiveInfinity;
            foreach (CoilPoint point in channel.Points)
            {
                double distance = (point.Position - head.Centre).Norm;
                nearest = double.IsFinite(distance) ? Math.Min(nearest, distance) : double.NaN;
            }

            if (!(nearest > head.OuterRadius))
            {
                problems.Add(new(file, 0, 0, key, double.IsNaN(nearest)
                    ? $"channel {channel.Name} has a coil point whose place is not a number; give finite coordinates"
                    : string.Create(CultureInfo.InvariantCulture,
                        $"channel {channel.Name} has a coil point {Si.ToMm(nearest):0.###} mm from the sphere's centre; coil points must lie outside the outer radius of {Si.ToMm(head.OuterRadius):0.###} mm; check the coils' frame and unit, or the head")));
            }
        }

        if (problems.Count > 0)
        {
            throw new InputException(problems);
        }
    }

    /// <inheritdoc/>
    /// <exception cref="ArgumentException">The block has other numbers of rows.</exception>
    /// <exception cref="ArgumentOutOfRangeException">A dipole lies outside the innermost layer's admitted part.</exception>
    public void Fill(LeadfieldBlock block)
    {
        if (block.EegRows != EegRows || block.MegRows != MegRows)
        {
            throw new ArgumentException(
                $"The block holds {block.EegRows} electrodes and {block.MegRows} channels; the head has {EegRows} and {MegRows}.", nameof(block));
        }

        double limit = LayeredSphere.LargestEccentricity * _head.InnerRadius * (1 + Rounding);
        foreach (Vec3 position in block.Positions)
        {
            if (!((position - _head.Centre).Norm <= limit))
            {
                throw new ArgumentOutOfRangeException(nameof(block), position, $"A dipole must stand within {limit} m of the sphere's centre.");
            }
        }

        _eeg?.Fill(block);
        _meg?.Fill(block);
    }
}
