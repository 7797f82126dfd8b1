using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Report.Figures;

namespace DeepSourceCheck.Report.Html;

/// <summary>The figures, each at page and at phone width, with caption and the table behind it.</summary>
internal static class FigureSection
{
    // Taller drawings may break over printed pages.
    private const int TallestUnbroken = 900;

    public static void Write(Markup html, Assessment assessment, bool files, FigureDrawings drawings)
    {
        IReadOnlyList<Figure> figures = drawings.Figures;
        if (figures.Count == 0)
        {
            return;
        }

        HtmlReport.Section(html, "figures", "Figures");
        html.Open("div", "class", "key");
        foreach (Modality modality in assessment.Responses.SelectMany(r => r.Regions).SelectMany(r => r.Verdicts).Select(v => v.Modality).Distinct().Order())
        {
            html.Open("span").Raw(InlineFigure.Mark(modality)).Raw(InlineFigure.Line(modality)).Text(modality == Modality.Both ? "both together" : Names.Of(modality)).Close();
        }

        AnswerSection.Key(html, InlineFigure.PlaceKey, "place and direction, 5 to 95 %");
        AnswerSection.Key(html, InlineFigure.OpenKey, "open: at an assumption");
        if (assessment.SessionTrials is not null)
        {
            AnswerSection.Key(html, InlineFigure.PlumbKey, "the session's limit");
        }

        html.CloseLine().Open("div", "class", "pairwise").Raw("\n");
        for (int k = 0; k < figures.Count; k++)
        {
            if (!figures[k].FullWidth)
            {
                One(html, figures[k], drawings.Page(k), files);
            }
        }

        html.CloseLine();
        for (int k = 0; k < figures.Count; k++)
        {
            if (figures[k].FullWidth)
            {
                One(html, figures[k], drawings.Page(k), files);
            }
        }

        html.CloseLine();
    }

    private static void One(Markup html, Figure figure, PageDrawing drawing, bool files)
    {
        string cssClass = string.Join(" ", new[] { figure.FullWidth ? "wide" : "", drawing.Height > TallestUnbroken ? "tall" : "" }.Where(c => c.Length > 0));
        if (cssClass.Length > 0)
        {
            html.Open("figure", "class", cssClass, "id", $"figure-{figure.Name}");
        }
        else
        {
            html.Open("figure", "id", $"figure-{figure.Name}");
        }

        html.Element("h3", figure.Title + ".").Raw("\n")
            .Raw(drawing.Wide)
            .Raw(drawing.Narrow);
        html.Open("figcaption").Element("b", figure.Quantity + "; ").Text(figure.Conditions).CloseLine();
        if (files)
        {
            html.Open("p", "class", "links")
                .Element("a", "SVG", "href", $"figures/{figure.Name}.svg").Element("a", "PNG", "href", $"figures/{figure.Name}.png").Close();
        }

        html.Open("details", "class", "behind").Element("summary", "Table");
        HtmlReport.Table(html, $"Numbers of the figure: {figure.Title}", figure.Table.Columns, figure.Table.Rows);
        html.Close().CloseLine();
    }
}
