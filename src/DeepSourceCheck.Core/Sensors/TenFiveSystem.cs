using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Sensors;

// How the sites follow from the four landmarks. Every curve is the section of the head with the plane through three points (a circle here).
//  1. Midline Nz-vertex-Iz in the plane x = 0, at steps of 5 % of its length. Cz is its middle.
//  2. Coronal curve LPA-Cz-RPA. Both sides are alike, so its middle is Cz too: Cz is the 50 % point of both curves at once, whatever the landmarks'
//     elevations. With Nz and Iz at unlike elevations (-23 and -14 degrees) Cz lies 4.5 degrees in front of the vertical, not on it.
//     T9, T9h and T7 are its 0, 5 and 10 % points (T9 is LPA itself).
//  3. Lateral curves: 0 % through Nz, T9, Iz; 5 % through NFpz, T9h, OIz; 10 % through Fpz, T7, Oz. Each of the two parts before and after the
//     middle point is divided into ten, so that T7 and its like are on both curves.
//  4. A row between a lateral site of the 10 % curve and its midline site: the curve through both lateral sites and the midline site, each half in eight
//     (rows AFp and POO in four).
// Source: Jurcak, Tsuzuki & Dan 2007, NeuroImage 34:1600 (21, 81 and 329 sites, curves by planes); Oostenveld & Praamstra 2001, Clin Neurophysiol
// 112:713 (names, 345 sites: these 329 and the eighths of rows AFp and POO). Rules from memory of both papers; the counts 21, 81 and 329 come out.

/// <summary>Directions of all 329 sites of the 10-5 system, and of the mastoids, seen from the centre of a sphere.</summary>
/// <remarks>x right, y front, z up. Immutable.</remarks>
internal static class TenFiveSystem
{
    /// <summary>Elevation of the nasion seen from the centre [rad].</summary>
    public static readonly double NasionElevation = Si.FromDegrees(-23);

    /// <summary>Elevation of the inion [rad].</summary>
    public static readonly double InionElevation = Si.FromDegrees(-14);

    /// <summary>Elevation of both preauricular points [rad].</summary>
    public static readonly double PreauricularElevation = Si.FromDegrees(-32);

    /// <summary>Azimuth of the mastoids from the front, to either side [rad].</summary>
    public static readonly double MastoidAzimuth = Si.FromDegrees(95);

    /// <summary>Elevation of the mastoids [rad].</summary>
    public static readonly double MastoidElevation = Si.FromDegrees(-26);

    // Rows from front to back; steps of 5 % of the midline from 15 to 85 %. Lateral and medial letters differ over the temporal lobe.
    private static readonly (string Midline, string Lateral, string Medial)[] Rows =
    [
        ("AFpz", "AFp", "AFp"), ("AFz", "AF", "AF"), ("AFFz", "AFF", "AFF"), ("Fz", "F", "F"), ("FFCz", "FFT", "FFC"),
        ("FCz", "FT", "FC"), ("FCCz", "FTT", "FCC"), ("Cz", "T", "C"), ("CCPz", "TTP", "CCP"), ("CPz", "TP", "CP"),
        ("CPPz", "TPP", "CPP"), ("Pz", "P", "P"), ("PPOz", "PPO", "PPO"), ("POz", "PO", "PO"), ("POOz", "POO", "POO"),
    ];

    private static readonly Dictionary<string, Vec3> Directions = Build();

    /// <summary>All 329 names: midline from front to back, then each curve and row from front to back, left before right.</summary>
    public static IReadOnlyList<string> Names { get; } = [.. Directions.Keys.Where(name => name is not ("M1" or "M2"))];

    /// <summary>Unit vector of a site or mastoid; false for unknown names.</summary>
    public static bool TryDirection(string name, out Vec3 direction) => Directions.TryGetValue(name, out direction);

    /// <summary>Unit vector at an azimuth from the front (positive to the right) and an elevation [rad].</summary>
    public static Vec3 Direction(double azimuth, double elevation)
    {
        (double sinA, double cosA) = Math.SinCos(azimuth);
        (double sinE, double cosE) = Math.SinCos(elevation);
        return new(sinA * cosE, cosA * cosE, sinE);
    }

    private static Dictionary<string, Vec3> Build()
    {
        Dictionary<string, Vec3> at = [];
        Vec3 nasion = Direction(0, NasionElevation), inion = Direction(Math.PI, InionElevation);
        SphereArc midline = new(nasion, new(0, 0, 1), inion);
        string[] midlineNames = ["Nz", "NFpz", "Fpz", .. Rows.Select(row => row.Midline), "Oz", "OIz", "Iz"];
        for (int k = 0; k < midlineNames.Length; k++)
        {
            at.Add(midlineNames[k], OnMidline(midline.At(k / 20.0)));
        }

        Vec3 preauricular = Direction(-Math.PI / 2, PreauricularElevation);
        SphereArc coronal = new(preauricular, at["Cz"], MirrorX(preauricular));
        Lateral(at, "Nz", coronal.At(0), "Iz", ["N1h", "N1"], "9", ["I1", "I1h"]);
        Lateral(at, "NFpz", coronal.At(0.05), "OIz", ["NFp1h", "NFp1"], "9h", ["OI1", "OI1h"]);
        Lateral(at, "Fpz", coronal.At(0.10), "Oz", ["Fp1h", "Fp1"], "7", ["O1", "O1h"]);
        foreach ((string middle, string lateral, string medial) in Rows)
        {
            Row(at, middle, lateral, medial);
        }

        AddPair(at, "M1", Direction(-MastoidAzimuth, MastoidElevation));
        return at;
    }

    /// <summary>Adds the 19 sites of one lateral curve, and their mirror images: steps of 5 % of the curve.</summary>
    private static void Lateral(
        Dictionary<string, Vec3> at, string front, Vec3 side, string back, string[] frontNames, string number, string[] backNames)
    {
        SphereArc curve = new(at[front], side, at[back]);
        string[] names = [.. frontNames, .. Rows.Select(row => row.Lateral + number), .. backNames];
        for (int k = 0; k < names.Length; k++)
        {
            int step = k + 1;
            AddPair(at, names[k], step == 10 ? side : step < 10 ? curve.Before(step / 10.0) : curve.After((step - 10) / 10.0));
        }
    }

    /// <summary>Adds the sites between a lateral site and the midline: seven a side, three in the rows AFp and POO.</summary>
    private static void Row(Dictionary<string, Vec3> at, string middle, string lateral, string medial)
    {
        Vec3 left = at[lateral + "7"];
        SphereArc row = new(left, at[middle], MirrorX(left));
        bool quarters = lateral is "AFp" or "POO";
        string[] names = [lateral + "7h", medial + "5", medial + "5h", medial + "3", medial + "3h", medial + "1", medial + "1h"];
        for (int k = quarters ? 1 : 0; k < names.Length; k += quarters ? 2 : 1)
        {
            AddPair(at, names[k], row.Before((k + 1) / 8.0));
        }
    }

    /// <summary>Adds a left site and its right twin: odd numbers are left, the next even one is right.</summary>
    private static void AddPair(Dictionary<string, Vec3> at, string leftName, Vec3 left)
    {
        at.Add(leftName, left);
        int digit = leftName.Length - (leftName[^1] == 'h' ? 2 : 1);
        string right = leftName[digit] == '9' ? "10" : ((char)(leftName[digit] + 1)).ToString();
        at.Add(leftName[..digit] + right + leftName[(digit + 1)..], MirrorX(left));
    }

    private static Vec3 MirrorX(Vec3 v) => v with { X = -v.X };

    private static Vec3 OnMidline(Vec3 v) => new Vec3(0, v.Y, v.Z).Unit();
}
