using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Sensors;

/// <summary>Electrodes at the sites of the 10-20, 10-10 and 10-5 systems, placed on a spherical or a real head by the systems' own rules.</summary>
/// <remarks>
/// Source: Jurcak, Tsuzuki &amp; Dan 2007, NeuroImage 34:1600; Oostenveld &amp; Praamstra 2001, Clin Neurophysiol 112:713.
/// On a sphere the landmarks Nz, Iz, LPA and RPA lie at elevations -23, -14, -32 and -32 degrees seen from the centre: a real head in MNI space, so that sites and regions agree.
/// </remarks>
public static class ElectrodeLayout
{
    private const string Key = "sensors.eeg.layout";

    private static readonly string[] Twenty =
        ["Fp1", "Fpz", "Fp2", "F7", "F3", "Fz", "F4", "F8", "T7", "C3", "Cz", "C4", "T8", "P7", "P3", "Pz", "P4", "P8", "O1", "Oz", "O2"];

    // The 61 sites of the 10-10 system at or above its 10 % curve, and three below it, where deep and low sources still show: TP9, TP10, Iz.
    private static readonly string[] SixtyFour =
    [
        "Fp1", "Fpz", "Fp2", "AF7", "AF3", "AFz", "AF4", "AF8",
        .. TenTenRow("F", "F"), .. TenTenRow("FT", "FC"), .. TenTenRow("T", "C"), .. TenTenRow("TP", "CP"), .. TenTenRow("P", "P"),
        "PO7", "PO3", "POz", "PO4", "PO8", "O1", "Oz", "O2", "TP9", "TP10", "Iz",
    ];

    private static readonly string[] EightyOne =
    [
        .. SixtyFour.Where(name => name is not ("TP9" or "TP10" or "Iz")),
        "Nz", "N1", "N2", "AF9", "AF10", "F9", "F10", "FT9", "FT10", "T9", "T10", "TP9", "TP10", "P9", "P10", "PO9", "PO10", "I1", "I2", "Iz",
    ];

    // Names of older papers and their sites: they are refused with the name that the systems use now.
    private static readonly Dictionary<string, string> Older = new(StringComparer.OrdinalIgnoreCase)
    {
        ["T3"] = "T7",
        ["T4"] = "T8",
        ["T5"] = "P7",
        ["T6"] = "P8",
    };

    /// <summary>The layouts by name: ten-twenty-21, ten-ten-64, ten-ten-81, ten-five-329.</summary>
    public static IReadOnlyList<string> Layouts { get; } = ["ten-twenty-21", "ten-ten-64", "ten-ten-81", "ten-five-329"];

    /// <summary>Every site that a derivation or reference may name: the 329 of the 10-5 system, M1 and M2.</summary>
    public static IReadOnlyList<string> Known { get; } = [.. TenFiveSystem.Names, "M1", "M2"];

    /// <summary>The sites of a layout, in the order in which its electrodes are listed everywhere.</summary>
    /// <exception cref="InputException">The layout is not known.</exception>
    public static IReadOnlyList<string> Names(string layout) => layout switch
    {
        "ten-twenty-21" => Twenty,
        "ten-ten-64" => SixtyFour,
        "ten-ten-81" => EightyOne,
        "ten-five-329" => TenFiveSystem.Names,
        _ => throw new InputException(
            null, Key, $"there is no layout '{layout}'{NearestName.Hint(layout, Layouts)}; use one of {string.Join(", ", Layouts)}, or give an electrodes table"),
    };

    /// <summary>Unit vector of a site seen from the head's centre (x right, y front, z up).</summary>
    /// <param name="name">Site of the 10-5 system, M1 or M2.</param>
    /// <param name="key">Key of the study that named it, for the message.</param>
    /// <exception cref="InputException">The name is not known; names the nearest.</exception>
    public static Vec3 Direction(string name, string? key = Key) =>
        TenFiveSystem.TryDirection(name, out Vec3 direction) ? direction : throw new InputException(null, key, Unknown(name, Known));

    /// <summary>The electrodes of a layout on the outer surface of a head, and those that join them.</summary>
    /// <param name="layout">Name of the layout.</param>
    /// <param name="head">Head; its outer radius is where electrodes lie.</param>
    /// <param name="joined">
    /// Sites that a derivation or the reference names beside the layout's, in any order; those of the layout are skipped. They are appended in the order given.
    /// Mastoids never enter the average; any other site is an electrode in use like the rest.
    /// </param>
    /// <exception cref="InputException">A name is not known; names the nearest.</exception>
    public static Electrode[] OnSphere(string layout, LayeredSphere head, IEnumerable<string> joined) =>
        Place(layout, joined, name => head.Centre + head.OuterRadius * Direction(name));

    /// <summary>The electrodes of a layout on the scalp of a real head, and those that join them.</summary>
    /// <param name="layout">Name of the layout.</param>
    /// <param name="sites">Sites on the scalp.</param>
    /// <param name="joined">As for <see cref="OnSphere"/>.</param>
    /// <exception cref="InputException">A name is not known; names the nearest.</exception>
    public static Electrode[] OnScalp(string layout, ScalpSites sites, IEnumerable<string> joined) =>
        Place(layout, joined, name => sites.TryPosition(name, out Vec3 position) ? position : throw new InputException(null, Key, Unknown(name, Known)));

    private static Electrode[] Place(string layout, IEnumerable<string> joined, Func<string, Vec3> position)
    {
        List<string> names = [.. Names(layout)];
        HashSet<string> seen = new(names, StringComparer.Ordinal);
        names.AddRange(joined.Where(seen.Add));
        return [.. names.Select(name => new Electrode(name, position(name), name is not ("M1" or "M2"), 0.0))];
    }

    /// <summary>The name that the systems use now for a site of the older ten-twenty system (T3 is T7); any other name as it is.</summary>
    /// <param name="name">Name, in capital or small letters.</param>
    public static string PresentName(string name) => Older.GetValueOrDefault(name, name);

    /// <summary>Message about a name that is not among <paramref name="known"/>.</summary>
    internal static string Unknown(string name, IEnumerable<string> known)
    {
        string[] all = [.. known];
        if (name is "A1" or "A2" && all.Contains("M1"))
        {
            return $"there is no electrode '{name}' at the ear lobe; the nearest site is the mastoid {(name == "A1" ? "M1" : "M2")}";
        }

        return Older.TryGetValue(name, out string? site) && all.Contains(site)
            ? $"there is no electrode '{name}'; the site is named {site} here"
            : $"there is no electrode '{name}'{NearestName.Hint(name, all)}";
    }

    private static string[] TenTenRow(string lateral, string medial) =>
    [
        lateral + "7", medial + "5", medial + "3", medial + "1", medial + "z", medial + "2", medial + "4", medial + "6", lateral + "8",
    ];
}
