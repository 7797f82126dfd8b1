using DeepSourceCheck.Core.Results;

using SkiaSharp;

namespace DeepSourceCheck.Report.Figures;

/// <summary>The light colours of report and figures. The page's stylesheet holds the same names, with their dark twins.</summary>
public static class Palette
{
    /// <summary>Page.</summary>
    public static readonly SKColor Ground = new(0xF4, 0xF6, 0xF3);

    /// <summary>Beyond the session.</summary>
    public static readonly SKColor Beyond = new(0xE4, 0xE9, 0xE5);

    /// <summary>Grid.</summary>
    public static readonly SKColor Hair = new(0xCD, 0xD4, 0xCF);

    /// <summary>Axes.</summary>
    public static readonly SKColor Edge = new(0x72, 0x7E, 0x7A);

    /// <summary>Text and plumb line.</summary>
    public static readonly SKColor Ink = new(0x17, 0x21, 0x1F);

    /// <summary>Secondary text.</summary>
    public static readonly SKColor Ink2 = new(0x4A, 0x57, 0x54);

    /// <summary>EEG marks.</summary>
    public static readonly SKColor Eeg = new(0xB2, 0x77, 0x0A);

    /// <summary>MEG marks.</summary>
    public static readonly SKColor Meg = new(0x06, 0x62, 0x6B);

    /// <summary>Marks of both together.</summary>
    public static readonly SKColor Both = new(0x30, 0x21, 0x71);

    /// <summary>Colour and its name in the stylesheet.</summary>
    public static IReadOnlyList<(SKColor Colour, string Token)> Tokens { get; } =
    [
        (Ground, "ground"), (Beyond, "beyond"), (Hair, "hair"), (Edge, "edge"), (Ink, "ink"), (Ink2, "ink2"), (Eeg, "eeg"), (Meg, "meg"), (Both, "both"),
    ];

    /// <summary>The marks' colour of a modality.</summary>
    public static SKColor Of(Modality modality) => modality switch { Modality.Eeg => Eeg, Modality.Meg => Meg, _ => Both };

    /// <summary>`#B2770A`.</summary>
    public static string Hex(SKColor colour) => $"#{colour.Red:X2}{colour.Green:X2}{colour.Blue:X2}";
}
