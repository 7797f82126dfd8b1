using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Heads.Voxels;

/// <summary>Length, breadth, top and midline of a head whose world frame is x right, y front, z up.</summary>
/// <remarks>
/// The upper head is what lies less than 0.6 head lengths below the top; its length is its front-back extent. Both follow together: going down from the top the extent
/// grows until the depth is 0.6 of it. The midline plane is the least-squares plane x = a + b y + c z through the middles between left and right scalp of the upper head,
/// left and right being along the plane's own normal: starting from x, both are found in turn (a head turned by 20 degrees settles in a dozen rounds).
/// </remarks>
internal sealed class HeadFrame
{
    /// <summary>Depth of the upper head below the top, in head lengths.</summary>
    public const double UpperHead = 0.6;

    private const double Layer = 0.002, Settled = 1e-4;
    private const int MostRounds = 40;

    private readonly double[] _plane;

    public HeadFrame(ScalpSurface scalp)
    {
        Scalp = scalp;
        ReadOnlySpan<Vec3> samples = scalp.Samples;
        double bottom = double.PositiveInfinity;
        Top = double.NegativeInfinity;
        foreach (Vec3 p in samples)
        {
            (Top, bottom) = (Math.Max(Top, p.Z), Math.Min(bottom, p.Z));
        }

        var layers = new (double Low, double High, double Left, double Right)[(int)((Top - bottom) / Layer) + 1];
        Array.Fill(layers, (double.PositiveInfinity, double.NegativeInfinity, double.PositiveInfinity, double.NegativeInfinity));
        foreach (Vec3 p in samples)
        {
            ref var l = ref layers[(int)((Top - p.Z) / Layer)];
            l = (Math.Min(l.Low, p.Y), Math.Max(l.High, p.Y), Math.Min(l.Left, p.X), Math.Max(l.Right, p.X));
        }

        (double low, double high, double left, double right) = layers[0];
        for (int n = 1; n < layers.Length && n * Layer < UpperHead * (high - low); n++)
        {
            (low, high, left, right) = (Math.Min(low, layers[n].Low), Math.Max(high, layers[n].High), Math.Min(left, layers[n].Left), Math.Max(right, layers[n].Right));
        }

        (Length, Breadth, Height) = (high - low, right - left, Top - bottom);
        Centre = new((left + right) / 2, (low + high) / 2, Top - Length / 2);
        (_plane, Asymmetry) = Midline();
        Centre = Centre with { X = MidlineX(Centre.Y, Centre.Z) };
    }

    public ScalpSurface Scalp { get; }

    /// <summary>Height of the top of the head [m].</summary>
    public double Top { get; }

    /// <summary>Front-back extent of the upper head [m].</summary>
    public double Length { get; }

    /// <summary>Left-right extent of the upper head [m].</summary>
    public double Breadth { get; }

    /// <summary>Extent from top to bottom [m].</summary>
    public double Height { get; }

    /// <summary>Point on the midline, half a head length below the top [m].</summary>
    public Vec3 Centre { get; }

    /// <summary>Root-mean-square distance of the middles between left and right from the midline plane [m].</summary>
    public double Asymmetry { get; }

    /// <summary>Angle between the midline plane and the plane of y and z [rad].</summary>
    public double MidlineTilt => Math.Atan(Math.Sqrt(_plane[1] * _plane[1] + _plane[2] * _plane[2]));

    /// <summary>Unit normal of the midline plane, to the right.</summary>
    public Vec3 Rightwards => new Vec3(1, -_plane[1], -_plane[2]).Unit();

    /// <summary>x of the midline plane [m].</summary>
    public double MidlineX(double y, double z) => _plane[0] + _plane[1] * (y - Centre.Y) + _plane[2] * (z - Centre.Z);

    /// <summary>What in the shape contradicts a frame with x right, y front and z up.</summary>
    public IEnumerable<string> Contradictions()
    {
        string Mm(double metres) => Si.ToMm(metres).ToString("0", CultureInfo.InvariantCulture);
        if (Breadth > 1.05 * Length)
        {
            yield return $"the head measures {Mm(Breadth)} mm along x and {Mm(Length)} mm along y; heads are longer than broad, so x may not point to the right";
        }

        if (Asymmetry > 0.03 * Length)
        {
            yield return $"left and right differ: the middle between them strays {Mm(Asymmetry)} mm from a plane, so x may not point to the right";
        }

        if (MidlineTilt > Si.FromDegrees(10))
        {
            yield return $"the head is turned or tilted by {Si.ToDegrees(MidlineTilt).ToString("0", CultureInfo.InvariantCulture)} degrees against the frame x right, y front, z up";
        }

        if (Height < UpperHead * Length)
        {
            yield return $"the head is only {Mm(Height)} mm high at a length of {Mm(Length)} mm: its lower part is missing, or z does not point up";
        }
    }

    private (double[] Plane, double Rms) Midline()
    {
        double[] plane = [Centre.X, 0, 0];
        double rms = 0;
        for (int round = 0; round < MostRounds; round++)
        {
            List<Vec3> middles = Middles(new Vec3(1, -plane[1], -plane[2]).Unit());
            if (FitPlane(middles) is not { } next)
            {
                break;
            }

            double turned = Math.Abs(next[1] - plane[1]) + Math.Abs(next[2] - plane[2]);
            plane = next;
            rms = Math.Sqrt(middles.Average(m => Math.Pow(m.X - plane[0] - plane[1] * (m.Y - Centre.Y) - plane[2] * (m.Z - Centre.Z), 2)));
            if (turned < Settled)
            {
                break;
            }
        }

        return (plane, rms);
    }

    /// <summary>Middles between the scalp to both sides of places in the upper head [m].</summary>
    private List<Vec3> Middles(Vec3 rightwards)
    {
        List<Vec3> middles = [];
        for (int row = 2; row <= 11; row++)
        {
            for (int column = -6; column <= 6; column++)
            {
                Vec3 from = new(Centre.X, Centre.Y + 0.05 * column * Length, Top - 0.05 * row * Length);
                if (Scalp.Contains(from) && Scalp.Outermost(from, -rightwards) is { } left && Scalp.Outermost(from, rightwards) is { } right)
                {
                    middles.Add((left + right) / 2);
                }
            }
        }

        return middles;
    }

    /// <summary>a, b and c of x = a + b (y - centre) + c (z - centre), or null where too few places decide them.</summary>
    private double[]? FitPlane(List<Vec3> middles)
    {
        var system = new double[3, 4];
        foreach (Vec3 m in middles)
        {
            ReadOnlySpan<double> v = [1, (m.Y - Centre.Y) / Length, (m.Z - Centre.Z) / Length, m.X / Length];
            for (int i = 0; i < 3; i++)
            {
                for (int j = 0; j < 4; j++)
                {
                    system[i, j] += v[i] * v[j];
                }
            }
        }

        return NormalEquations.Solve(system) is { } s ? [s[0] * Length, s[1], s[2]] : null;
    }
}
