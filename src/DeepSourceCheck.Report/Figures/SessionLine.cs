using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Report.Answers;

namespace DeepSourceCheck.Report.Figures;

/// <summary>The plumb line at the session's end, with its words on the side that has room.</summary>
internal static class SessionLine
{
    /// <summary>`session 40 min`; `session 45 min / 4 averages` where it holds several, whose counts the axis shows; `session` where its length is not stated.</summary>
    public static string Label(Assessment assessment) => assessment.Study.Protocol is { Session: { } seconds } p
        ? $"session {Say.SessionMinutes(seconds)} min{(IsShared(assessment) ? $" / {Say.Stated(p.Conditions * p.Replications)} averages" : "")}"
        : "session";

    /// <summary>Whether the session holds several averages.</summary>
    public static bool IsShared(Assessment assessment) => assessment.Study.Protocol is { } p && p.Conditions * p.Replications > 1;

    /// <summary>Draws it.</summary>
    /// <param name="pen">Pen.</param>
    /// <param name="x">Place across [pixels].</param>
    /// <param name="above">How far it stands out above the plot [pixels].</param>
    /// <param name="label">Words.</param>
    /// <param name="halo">True: the words stand clear of what lies below them.</param>
    public static void Draw(FigurePen pen, float x, float above, string label, bool halo = false)
    {
        pen.PlumbLine(x, pen.Top - above, pen.Bottom + 2);
        bool leftwards = x > (pen.Left + pen.Right) / 2;
        pen.Text(label, x + (leftwards ? -6 : 6), pen.Top - above - (above < 20 ? 4 : 2), FigurePen.Label, leftwards ? Anchor.End : Anchor.Start, semiBold: true, halo: halo);
    }
}
