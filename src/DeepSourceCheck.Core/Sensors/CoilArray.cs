using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Sensors;

// Sites. The golden-angle spiral of n points on a whole sphere has point k at height z_k = 1 - (2k + 1)/n and azimuth k golden angles. Its density is even
// everywhere, so the part of it above the edge is even too, whatever the edge's shape. Taking n as a real number, z_k grows with n and the azimuth stays:
// point k rises above the edge, once and for all, at n_k = (2k + 1)/(1 - sin e(az_k)). The number of points above the edge is therefore the number of
// n_k below n: the wanted count is met exactly by any n between the count-th and the next of the sorted n_k. The middle of that interval is taken.

/// <summary>Generates MEG arrays on a cap: around a spherical scalp here, around a real one by <see cref="HeadArray"/>.</summary>
public static class CoilArray
{
    /// <summary>Default elevation of the lower edge in front [rad].</summary>
    public static readonly double DefaultEdgeFront = Si.FromDegrees(10);

    /// <summary>Default elevation of the lower edge at the back [rad].</summary>
    public static readonly double DefaultEdgeBack = Si.FromDegrees(-35);

    /// <summary>Most sites of an array.</summary>
    public const int MostSites = 20_000;

    /// <summary>Largest elevation of the edge, up or down [rad].</summary>
    public static readonly double LargestEdge = Si.FromDegrees(80);

    internal const string Key = "sensors.meg";

    /// <summary>The coils that an array can be made of.</summary>
    public static IReadOnlyList<string> Coils { get; } =
        ["magnetometer", "axial-gradiometer", "planar-gradiometer", "on-scalp", "on-scalp-triaxial"];

    /// <summary>Channels of an array, one integration point a loop, from the top of the cap downwards.</summary>
    /// <param name="choice">Coil, sites, baseline, gap and edge.</param>
    /// <param name="centre">Centre of the head [m].</param>
    /// <param name="scalpRadius">Radius of the scalp [m].</param>
    /// <returns>
    /// One channel a site (`M001`), two for planar gradiometers (`M001a` down the meridian, `M001b` across it),
    /// three for triaxial sensors (`M001r` outward, `M001a`, `M001b`).
    /// </returns>
    /// <exception cref="InputException">Unknown coil, or a number out of range.</exception>
    public static MegChannel[] Generate(CoilArrayChoice choice, Vec3 centre, double scalpRadius) =>
        Generate(choice, direction => (centre + (scalpRadius + choice.Gap) * direction, direction));

    /// <summary>Channels of an array on any surface.</summary>
    /// <param name="choice">Coil, sites, baseline, gap and edge.</param>
    /// <param name="surface">Where the site in a direction from the centre lies [m], and its outward unit vector.</param>
    /// <exception cref="InputException">Unknown coil, or a number out of range.</exception>
    internal static MegChannel[] Generate(CoilArrayChoice choice, Func<Vec3, (Vec3 Place, Vec3 Outward)> surface)
    {
        Check(choice);
        Vec3[] directions = SiteDirections(choice.Sites, new(choice.EdgeFront, choice.EdgeBack));
        string digits = new('0', Math.Max(3, choice.Sites.ToString(CultureInfo.InvariantCulture).Length));
        List<MegChannel> channels = [];
        for (int k = 0; k < directions.Length; k++)
        {
            (Vec3 place, Vec3 outward) = surface(directions[k]);
            Site site = new("M" + (k + 1).ToString(digits, CultureInfo.InvariantCulture), place, outward);
            channels.AddRange(choice.Coil switch
            {
                "axial-gradiometer" => [site.Axial(choice.Baseline)],
                "planar-gradiometer" => [site.Planar("a", site.Down, choice.Baseline), site.Planar("b", site.Across, choice.Baseline)],
                "on-scalp-triaxial" => [site.Single("r", site.Outward), site.Single("a", site.Down), site.Single("b", site.Across)],
                _ => new[] { site.Single("", site.Outward) },
            });
        }

        return [.. channels];
    }

    /// <summary>Unit vectors of exactly <paramref name="sites"/> evenly spread sites above the edge, highest first.</summary>
    public static Vec3[] SiteDirections(int sites, CapEdge edge)
    {
        // Every n_k of the sites lies below 2 sites/(1 - sin(highest edge)) + 2: points beyond that index cannot be among the first.
        double highest = Math.Sin(Math.Max(edge.Front, edge.Back)), lowest = Math.Sin(Math.Min(edge.Front, edge.Back));
        int candidates = (int)Math.Ceiling((sites + 2) * (1 - lowest) / (1 - highest)) + 2;
        double[] entry = new double[candidates];
        for (int k = 0; k < candidates; k++)
        {
            (double sin, double cos) = Azimuth(k);
            entry[k] = (2 * k + 1) / (1 - Math.Sin(edge.ElevationAt(new(sin, cos, 0))));
        }

        double[] sorted = [.. entry.Order()];
        double density = (sorted[sites - 1] + sorted[sites]) / 2;
        List<Vec3> directions = [];
        for (int k = 0; k < candidates; k++)
        {
            if (entry[k] < density)
            {
                double z = 1 - (2 * k + 1) / density, across = Math.Sqrt(1 - z * z);
                (double sin, double cos) = Azimuth(k);
                directions.Add(new(across * sin, across * cos, z));
            }
        }

        return [.. directions];
    }

    private static (double Sin, double Cos) Azimuth(int k) => Math.SinCos(GoldenSpiral.Angle * (k + 0.5));

    internal static void Check(CoilArrayChoice choice)
    {
        List<InputProblem> problems = [];
        void Require(bool holds, string key, string message)
        {
            if (!holds)
            {
                problems.Add(new(null, 0, 0, key, message));
            }
        }

        string Mm(double metres) => Si.ToMm(metres).ToString("0.###", CultureInfo.InvariantCulture);
        string Deg(double radians) => Si.ToDegrees(radians).ToString("0.###", CultureInfo.InvariantCulture);
        Require(Coils.Contains(choice.Coil), Key + ".coil",
            $"there is no coil '{choice.Coil}'{NearestName.Hint(choice.Coil, Coils)}; use one of {string.Join(", ", Coils)}");
        Require(choice.Sites is >= 1 and <= MostSites, Key + ".sites", $"{choice.Sites} sites; 1 to {MostSites} are allowed");
        Require(choice.Gap > 0 && double.IsFinite(choice.Gap), Key + ".gap_mm",
            $"a gap of {Mm(choice.Gap)} mm; coils must lie outside the scalp, so give more than 0");
        if (choice.Coil is "axial-gradiometer" or "planar-gradiometer")
        {
            Require(choice.Baseline > 0 && double.IsFinite(choice.Baseline), Key + ".baseline_mm",
                $"a baseline of {Mm(choice.Baseline)} mm; give more than 0");
        }

        foreach ((double edge, string end) in new[] { (choice.EdgeFront, "front"), (choice.EdgeBack, "back") })
        {
            Require(Math.Abs(edge) <= LargestEdge, $"sensors.meg_edge_deg.{end}",
                $"{Deg(edge)} degrees; an elevation from -{Deg(LargestEdge)} to {Deg(LargestEdge)} is allowed");
        }

        if (problems.Count > 0)
        {
            throw new InputException(problems);
        }
    }

    /// <summary>One site with its three axes.</summary>
    private readonly struct Site
    {
        private readonly string _name;
        private readonly Vec3 _place;

        public Site(string name, Vec3 place, Vec3 outward)
        {
            (_name, _place) = (name, place);
            Outward = outward;
            Vec3 across = Vec3.Cross(new(0, 0, 1), outward);
            Across = across.Norm > 1e-9 ? across.Unit() : new(1, 0, 0);
            Down = Vec3.Cross(Across, outward);
        }

        /// <summary>Away from the head.</summary>
        public Vec3 Outward { get; }

        /// <summary>Along the circle of equal elevation.</summary>
        public Vec3 Across { get; }

        /// <summary>Down the meridian.</summary>
        public Vec3 Down { get; }

        public MegChannel Single(string suffix, Vec3 axis) => new(_name + suffix, CoilKind.Magnetometer, [new(_place, axis, 1.0)]);

        public MegChannel Axial(double baseline) =>
            new(_name, CoilKind.AxialGradiometer, [new(_place, Outward, 1.0), new(_place + baseline * Outward, Outward, -1.0)]);

        public MegChannel Planar(string suffix, Vec3 along, double baseline) => new(
            _name + suffix,
            CoilKind.PlanarGradiometer,
            [new(_place + baseline / 2 * along, Outward, 1 / baseline), new(_place - baseline / 2 * along, Outward, -1 / baseline)]);
    }
}
