using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Report.Figures;

/// <summary>Rows of marks on one axis of accepted trials, a group a region: what figures of rules and of variants share.</summary>
internal static class TrialRows
{
    private const float Heading = 24, Row = 44, GroupGap = 16;

    /// <summary>Rows below one heading.</summary>
    /// <param name="Heading">Name of the region.</param>
    /// <param name="Rows">Its rows.</param>
    public sealed record Group(string Heading, IReadOnlyList<Entry> Rows);

    /// <summary>One row.</summary>
    /// <param name="Label">What stands left of it.</param>
    /// <param name="Marks">Draws its marks, given the row's upper edge [px].</param>
    public sealed record Entry(string Label, Action<FigurePen, float> Marks);

    /// <summary>The sheet.</summary>
    /// <param name="width">Width [px].</param>
    /// <param name="assessment">The assessment, for the session's line.</param>
    /// <param name="axis">Axis of trials.</param>
    /// <param name="groups">At least one, each with a row.</param>
    /// <param name="widestGutter">Largest share of the width that labels may take.</param>
    public static FigureSheet Draw(int width, Assessment assessment, LogAxis axis, IReadOnlyList<Group> groups, float widestGutter)
    {
        const float Right = 34, Top = 40, Bottom = 46;
        float gutter = Math.Min(widestGutter * width, 16 + groups.SelectMany(g => g.Rows).Max(r => FigurePen.Width(r.Label, FigurePen.Small)) + 16);
        float rows = groups.Sum(g => Heading + g.Rows.Count * Row) + (groups.Count - 1) * GroupGap + 10;
        FigureSheet sheet = new(width, (int)(Top + rows + Bottom), gutter, Right, Top, Bottom);
        double? session = TrialsFigure.OnTrials(sheet, axis, assessment);
        sheet.Over(pen =>
        {
            pen.Text("accepted trials", 16, pen.Bottom + 36, FigurePen.Small, colour: Palette.Ink2);
            if (session is { } x)
            {
                SessionLine.Draw(pen, pen.X(x), 20, SessionLine.Label(assessment));
            }

            float y = pen.Top + 4;
            foreach (Group group in groups)
            {
                pen.Text(FigurePen.Fit(group.Heading, width - 32, FigurePen.Label, true), 16, y + 14, semiBold: true, halo: true);
                y += Heading;
                foreach (Entry row in group.Rows)
                {
                    pen.Text(FigurePen.Fit(row.Label, gutter - 26, FigurePen.Small), 16, y + Row / 2 + 4, FigurePen.Small, colour: Palette.Ink2);
                    row.Marks(pen, y);
                    pen.Line(pen.Left, y + Row, pen.Right, y + Row, Palette.Hair, 1);
                    y += Row;
                }

                y += GroupGap;
            }
        });
        return sheet;
    }
}
