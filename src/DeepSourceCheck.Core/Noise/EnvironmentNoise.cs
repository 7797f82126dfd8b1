using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Sensors;

namespace DeepSourceCheck.Core.Noise;

// EnvironmentNoise.cs - the magnetic noise of the room, which is smooth over an array because its causes are far away.
//   B(r) = sum_j e_j(t) g_j(r), the gradients of the eight regular solid harmonics of degrees 1 and 2 about the array's middle r0:
//     degree 1, three homogeneous fields   (1,0,0)  (0,1,0)  (0,0,1)
//     degree 2, five gradients, q / R of   (y,x,0)  (0,z,y)  (z,0,x)  (x,-y,0)  (-x,-y,2z)/sqrt(3)
//   with independent e_j of the stated density d each. r0 is the mean of the channels' sites, R the root-mean-square distance of the sites from it.
//   So every axis of a magnetometer in the middle of the array reads exactly d, whichever way it points. Averaged over the sphere of radius R about r0 and over the
//   axes, the five gradients of q = 1 have variance (10/9) d^2; q is chosen such that they have a quarter of the amplitude of the homogeneous field.
//   A channel reads the weighted sum over its integration points: what a gradiometer does not see is not put in.
// Source: common practice, no source (expansion of a source-free field in regular solid harmonics; the share of the gradients: a source some 12 R away, as a room's
// walls are, changes over R by 3 R / distance = 1/4 of its field).

/// <summary>Magnetic noise of the room: eight smooth spatial terms.</summary>
public sealed class EnvironmentNoise : INoiseTerm
{
    /// <summary>Spatial terms: three homogeneous fields and five gradients.</summary>
    public const int Terms = 8;

    /// <summary>Amplitude of the five gradients together, rms over the sphere of the array's radius and over axes, relative to a homogeneous field.</summary>
    public const double GradientShare = 0.25;

    // q of the header: (10/9) q^2 = GradientShare^2.
    private static readonly double Gradient = GradientShare * Math.Sqrt(0.9);

    private readonly double _density;
    private readonly double _corner;

    /// <param name="channels">MEG channels.</param>
    /// <param name="density">Amplitude density of each homogeneous field, well above the corner [T/sqrt(Hz)].</param>
    /// <param name="corner">Frequency below which it rises as one over f in power [Hz]; 0 for white.</param>
    public EnvironmentNoise(IReadOnlyList<MegChannel> channels, double density, double corner)
    {
        Meg = new NoisePattern(null, Pattern(channels), Terms);
        _density = density;
        _corner = corner;
    }

    /// <inheritdoc/>
    public string Name => "environment";

    /// <inheritdoc/>
    public NoisePattern? Eeg => null;

    /// <inheritdoc/>
    public NoisePattern? Meg { get; }

    /// <inheritdoc/>
    public IReadOnlyList<double> Breakpoints => [];

    /// <inheritdoc/>
    public NoisePower At(double frequency) => new(0, _density * _density * InstrumentNoise.Power(_corner, frequency), 0);

    /// <summary>What each channel reads of each term of unit density, homogeneous fields first.</summary>
    /// <param name="channels">MEG channels.</param>
    /// <returns>Channels x <see cref="Terms"/>, row by row: without unit, planar gradiometers [1/m].</returns>
    public static double[] Pattern(IReadOnlyList<MegChannel> channels) => Read(channels, Vec3.Dot);

    /// <summary>What each channel would read if its points added instead of cancelling: the size beside which a reading is rounding.</summary>
    /// <param name="channels">MEG channels.</param>
    /// <returns>As <see cref="Pattern"/>.</returns>
    internal static double[] Size(IReadOnlyList<MegChannel> channels) => Read([.. channels.Select(c => c with
    {
        Points = [.. c.Points.Select(p => p with { Share = Math.Abs(p.Share) })],
    })], (axis, field) => field.Norm);

    private static double[] Read(IReadOnlyList<MegChannel> channels, Func<Vec3, Vec3, double> component)
    {
        Vec3 middle = channels.Aggregate(Vec3.Zero, (sum, c) => sum + c.Site) / channels.Count;
        double radius = Math.Sqrt(channels.Average(c => Math.Pow((c.Site - middle).Norm, 2)));
        var pattern = new double[channels.Count * Terms];
        for (int k = 0; k < channels.Count; k++)
        {
            foreach (CoilPoint point in channels[k].Points)
            {
                for (int term = 0; term < Terms; term++)
                {
                    pattern[k * Terms + term] += point.Share * component(point.Axis, Field(term, point.Position - middle, radius));
                }
            }
        }

        return pattern;
    }

    /// <summary>Field of one term of unit density.</summary>
    /// <param name="term">0 to 7, in the order of the header.</param>
    /// <param name="r">Place from the array's middle [m].</param>
    /// <param name="radius">R [m]; 0 (a single site) leaves the gradients out.</param>
    internal static Vec3 Field(int term, Vec3 r, double radius)
    {
        double q = radius > 0 ? Gradient / radius : 0;
        return term switch
        {
            0 => new(1, 0, 0),
            1 => new(0, 1, 0),
            2 => new(0, 0, 1),
            3 => q * new Vec3(r.Y, r.X, 0),
            4 => q * new Vec3(0, r.Z, r.Y),
            5 => q * new Vec3(r.Z, 0, r.X),
            6 => q * new Vec3(r.X, -r.Y, 0),
            _ => q / Math.Sqrt(3) * new Vec3(-r.X, -r.Y, 2 * r.Z),
        };
    }
}
