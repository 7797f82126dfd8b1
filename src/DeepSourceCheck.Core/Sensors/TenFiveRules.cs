using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Sensors;

// How the sites follow from the four landmarks. Every curve is the section of the head with the plane through three points: a circle on a sphere.
//  1. Midline Nz-Cz-Iz, at steps of 5 % of its length.
//  2. Coronal curve LPA-Cz-RPA. Cz is the 50 % point of both curves at once. T9, T9h and T7 are its 0, 5 and 10 % points (T9 is LPA itself), T8, T10h and T10 its
//     90, 95 and 100 % points.
//  3. Lateral curves: 0 % through Nz, T9, Iz; 5 % through NFpz, T9h, OIz; 10 % through Fpz, T7, Oz. Each of the two parts before and after the
//     middle point is divided into ten, so that T7 and its like are on both curves.
//  4. A row between a lateral site of the 10 % curve and its midline site: the curve through both lateral sites and the midline site, each half in eight
//     (rows AFp and POO in four).
// Source: Jurcak, Tsuzuki & Dan 2007, NeuroImage 34:1600 (21, 81 and 329 sites, curves by planes); Oostenveld & Praamstra 2001, Clin Neurophysiol
// 112:713 (names, 345 sites: these 329 and the eighths of rows AFp and POO). Rules from memory of both papers; the counts 21, 81 and 329 come out.

/// <summary>The rules of the 10-20, 10-10 and 10-5 systems, for any head that has curves through three points.</summary>
internal static class TenFiveRules
{
    // Rows from front to back; steps of 5 % of the midline from 15 to 85 %. Lateral and medial letters differ over the temporal lobe.
    private static readonly (string Midline, string Lateral, string Medial)[] Rows =
    [
        ("AFpz", "AFp", "AFp"), ("AFz", "AF", "AF"), ("AFFz", "AFF", "AFF"), ("Fz", "F", "F"), ("FFCz", "FFT", "FFC"),
        ("FCz", "FT", "FC"), ("FCCz", "FTT", "FCC"), ("Cz", "T", "C"), ("CCPz", "TTP", "CCP"), ("CPz", "TP", "CP"),
        ("CPPz", "TPP", "CPP"), ("Pz", "P", "P"), ("PPOz", "PPO", "PPO"), ("POz", "PO", "PO"), ("POOz", "POO", "POO"),
    ];

    /// <summary>The curve from the first over the second to the third point.</summary>
    public delegate ISiteCurve CurveThrough(Vec3 start, Vec3 through, Vec3 end);

    /// <summary>A head whose sides are alike: what is computed on the left is mirrored, so that both sides are alike to the last bit.</summary>
    /// <param name="Mirror">Left to right.</param>
    /// <param name="OntoMidline">Onto the midline, against rounding.</param>
    public sealed record Symmetry(Func<Vec3, Vec3> Mirror, Func<Vec3, Vec3> OntoMidline);

    /// <summary>All 329 sites by name: midline from front to back, then each curve and row from front to back, left before right.</summary>
    /// <param name="left">LPA, on the surface.</param>
    /// <param name="right">RPA.</param>
    /// <param name="cz">The middle of the midline and of the coronal curve; null: the middle of the midline, exactly.</param>
    /// <param name="midline">Curve Nz-Cz-Iz.</param>
    /// <param name="curve">Curves of the surface.</param>
    /// <param name="symmetry">Of a head whose sides are alike; null: each side has its own curves.</param>
    public static Dictionary<string, Vec3> Place(Vec3 left, Vec3 right, Vec3? cz, ISiteCurve midline, CurveThrough curve, Symmetry? symmetry = null)
    {
        Dictionary<string, Vec3> at = [];
        string[] midlineNames = ["Nz", "NFpz", "Fpz", .. Rows.Select(row => row.Midline), "Oz", "OIz", "Iz"];
        for (int k = 0; k < midlineNames.Length; k++)
        {
            Vec3 site = k == 10 && cz is { } middle ? middle : midline.At(k / 20.0);
            at.Add(midlineNames[k], symmetry is null ? site : symmetry.OntoMidline(site));
        }

        ISiteCurve coronal = curve(left, at["Cz"], right);
        Lateral("Nz", 0, "Iz", ["N1h", "N1"], "9", ["I1", "I1h"]);
        Lateral("NFpz", 0.05, "OIz", ["NFp1h", "NFp1"], "9h", ["OI1", "OI1h"]);
        Lateral("Fpz", 0.10, "Oz", ["Fp1h", "Fp1"], "7", ["O1", "O1h"]);
        foreach ((string middle, string lateral, string medial) in Rows)
        {
            Row(middle, lateral, medial);
        }

        return at;

        // The 19 sites a side of one lateral curve: steps of 5 % of the curve.
        void Lateral(string front, double share, string back, string[] frontNames, string number, string[] backNames)
        {
            Vec3 leftSide = coronal.At(share), rightSide = coronal.At(1 - share);
            ISiteCurve leftCurve = curve(at[front], leftSide, at[back]);
            ISiteCurve? rightCurve = symmetry is null ? curve(at[front], rightSide, at[back]) : null;
            string[] names = [.. frontNames, .. Rows.Select(row => row.Lateral + number), .. backNames];
            for (int k = 0; k < names.Length; k++)
            {
                int step = k + 1;
                Vec3 On(ISiteCurve c, Vec3 side) => step == 10 ? side : step < 10 ? c.Before(step / 10.0) : c.After((step - 10) / 10.0);
                Vec3 site = On(leftCurve, leftSide);
                AddPair(names[k], site, symmetry is null ? On(rightCurve!, rightSide) : symmetry.Mirror(site));
            }
        }

        // The sites between a lateral site and the midline: seven a side, three in the rows AFp and POO.
        void Row(string middle, string lateral, string medial)
        {
            Vec3 leftEnd = at[lateral + "7"], rightEnd = at[lateral + "8"];
            ISiteCurve row = curve(leftEnd, at[middle], rightEnd);
            bool quarters = lateral is "AFp" or "POO";
            string[] names = [lateral + "7h", medial + "5", medial + "5h", medial + "3", medial + "3h", medial + "1", medial + "1h"];
            for (int k = quarters ? 1 : 0; k < names.Length; k += quarters ? 2 : 1)
            {
                Vec3 site = row.Before((k + 1) / 8.0);
                AddPair(names[k], site, symmetry is null ? row.After(1 - (k + 1) / 8.0) : symmetry.Mirror(site));
            }
        }

        void AddPair(string leftName, Vec3 leftSite, Vec3 rightSite)
        {
            at.Add(leftName, leftSite);
            at.Add(RightOf(leftName), rightSite);
        }
    }

    /// <summary>The right twin of a left site: odd numbers are left, the next even one is right.</summary>
    public static string RightOf(string leftName)
    {
        int digit = leftName.Length - (leftName[^1] == 'h' ? 2 : 1);
        string right = leftName[digit] == '9' ? "10" : ((char)(leftName[digit] + 1)).ToString();
        return leftName[..digit] + right + leftName[(digit + 1)..];
    }
}
