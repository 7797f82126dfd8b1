using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Report.Answers;
using DeepSourceCheck.Report.Figures;

namespace DeepSourceCheck.Report.Html;

/// <summary>report.html: one file that needs nothing else.</summary>
/// <remarks>Style, script, figures and tables stand inside; the page's own policy forbids every outside load. Same assessment, same bytes: no time stamp.</remarks>
public static class HtmlReport
{
    /// <summary>What the browser may load: this page's own style and script, nothing else.</summary>
    public const string Policy = "default-src 'none'; style-src 'unsafe-inline'; script-src 'unsafe-inline'; img-src data:; base-uri 'none'; form-action 'none'";

    private static readonly (string Id, string Words)[] Links =
    [
        ("answer", "Answer"), ("figures", "Figures"), ("results", "Results"), ("assumptions", "Assumptions"), ("limits", "Limits"), ("cautions", "Cautions"), ("provenance", "Provenance"),
    ];

    /// <summary>The whole page.</summary>
    /// <param name="assessment">What to report.</param>
    /// <param name="figureFiles">True where the figures also stand in a folder `figures` beside the page, so that it may link to them.</param>
    public static string Text(Assessment assessment, bool figureFiles) => Text(assessment, figureFiles, FigureDrawings.Begin(assessment, files: false, page: true));

    /// <summary>The whole page, with drawings that were begun before.</summary>
    internal static string Text(Assessment assessment, bool figureFiles, FigureDrawings drawings)
    {
        Markup html = new();
        html.Open("html", "lang", "en").Raw("\n");
        Head(html, assessment);
        html.Open("body").Raw("\n");
        Bar(html);
        html.Open("main", "id", "main").Raw("\n");
        for (int k = 0; k < assessment.Responses.Count; k++)
        {
            AnswerSection.Write(html, assessment, k);
        }

        RuleSection.Write(html, assessment);
        UnknownsSection.Write(html, assessment);
        PeopleSection.Write(html, assessment);
        StoppingSection.Write(html, assessment);
        AttributionSection.Write(html, assessment);
        VariantSection.Write(html, assessment);
        if (assessment.Warnings.Count > 0)
        {
            Section(html, "warnings", "What to know about this run");
            List(html, WarningText.Grouped(assessment.Warnings));
            html.CloseLine();
        }

        FigureSection.Write(html, assessment, figureFiles, drawings);
        CortexSection.Write(html, assessment);
        ResultSection.Write(html, assessment);
        AssumptionSection.Write(html, assessment);
        LimitSection.Write(html, assessment);
        Section(html, "cautions", "Cautions");
        html.Open("dl", "class", "full-cautions");
        foreach ((string heading, string text) in Cautions.All)
        {
            html.Element("dt", heading).Element("dd", text);
        }

        html.Close().CloseLine();
        Provenance(html, assessment);
        html.CloseLine();
        html.Open("script").Raw("\n" + Resource("html/report.js")).CloseLine();
        html.CloseLine().CloseLine();
        return "<!DOCTYPE html>\n" + html;
    }

    /// <summary>The stylesheet of the page.</summary>
    public static string Stylesheet => Resource("html/report.css");

    /// <summary>Opens a section with its heading.</summary>
    internal static void Section(Markup html, string id, string heading) =>
        html.Open("section", "id", id).Element("h2", heading).Raw("\n");

    /// <summary>A list of sentences.</summary>
    internal static void List(Markup html, IReadOnlyList<string> texts)
    {
        html.Open("ul", "class", "texts");
        foreach (string text in texts)
        {
            html.Element("li", text);
        }

        html.Close();
    }

    /// <summary>A table in a frame that scrolls by itself where it is too wide.</summary>
    /// <param name="html">Where to write.</param>
    /// <param name="label">What the table holds, for those who do not see it.</param>
    /// <param name="columns">Headings.</param>
    /// <param name="rows">Cells.</param>
    /// <param name="classes">A class a column: `n` for numbers, `long` for running text, or empty.</param>
    internal static void Table(Markup html, string label, IReadOnlyList<string> columns, IEnumerable<IReadOnlyList<string>> rows, IReadOnlyList<string>? classes = null)
    {
        string Class(int k) => classes is not null && k < classes.Count ? classes[k] : "";
        html.Open("div", "class", "scroll", "tabindex", "0", "role", "region", "aria-label", label).Open("table").Open("thead").Open("tr");
        for (int k = 0; k < columns.Count; k++)
        {
            html.Element("th", columns[k], Attributes("scope", "col", "class", Class(k)));
        }

        html.Close().Close().Open("tbody").Raw("\n");
        foreach (IReadOnlyList<string> row in rows)
        {
            html.Open("tr");
            for (int k = 0; k < row.Count; k++)
            {
                html.Element("td", row[k], Attributes("class", Class(k)));
            }

            html.CloseLine();
        }

        html.Close().Close().CloseLine();
    }

    // Drops pairs whose value is empty.
    private static string[] Attributes(params string[] pairs) =>
        [.. Enumerable.Range(0, pairs.Length / 2).Where(k => pairs[2 * k + 1].Length > 0).SelectMany(k => new[] { pairs[2 * k], pairs[2 * k + 1] })];

    private static void Head(Markup html, Assessment assessment)
    {
        html.Open("head").Raw("\n")
            .Void("meta", "charset", "utf-8").Raw("\n")
            .Void("meta", "http-equiv", "Content-Security-Policy", "content", Policy).Raw("\n")
            .Void("meta", "name", "viewport", "content", "width=device-width, initial-scale=1").Raw("\n")
            .Void("meta", "name", "generator", "content", $"{ProgramName.Text} {assessment.Version}").Raw("\n")
            .Element("title", $"{assessment.Study.Title}: can it be detected?").Raw("\n")
            .Open("style").Raw("\n" + Stylesheet).CloseLine();
        html.CloseLine();
    }

    private static void Bar(Markup html)
    {
        html.Element("a", "To the answer", "class", "skip", "href", "#main");
        html.Open("header", "class", "bar").Open("div");
        html.Open("span", "class", "name").Raw(InlineFigure.Glyph).Text(ProgramName.Text).Close();
        html.Open("nav", "aria-label", "Sections");
        foreach ((string id, string words) in Links)
        {
            html.Element("a", words, "href", "#" + id);
        }

        html.Close().Open("details").Element("summary", "Sections").Open("div");
        foreach ((string id, string words) in Links)
        {
            html.Element("a", words, "href", "#" + id);
        }

        html.Close().Close();
        html.Element("button", "Dark", "type", "button", "id", "theme", "hidden", "hidden").Element("button", "Print", "type", "button", "id", "print", "hidden", "hidden");
        html.Close().CloseLine();
    }

    private static void Provenance(Markup html, Assessment assessment)
    {
        Section(html, "provenance", "Provenance");
        html.Open("div", "class", "provenance");
        html.Element("p", $"{ProgramName.Text} {assessment.Version}; study: {assessment.Study.File}");
        foreach (InputFile file in assessment.Inputs)
        {
            html.Element("p", $"{file.Path}  sha256 {file.Sha256}");
        }

        html.Close().Element("p", "The same inputs give the same bytes on one machine, whatever the number of threads: this page holds no time stamp. The machine-readable answer is assessment.json beside it.", "class", "small").CloseLine();
    }

    private static string Resource(string name)
    {
        using Stream stream = typeof(HtmlReport).Assembly.GetManifestResourceStream(name)
            ?? throw new InvalidOperationException($"The program was built without {name}.");
        using StreamReader reader = new(stream);
        return reader.ReadToEnd().ReplaceLineEndings("\n");
    }
}
