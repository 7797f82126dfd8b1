using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Report.Figures;
using DeepSourceCheck.Report.Html;
using DeepSourceCheck.Report.Tables;

namespace DeepSourceCheck.Report;

/// <summary>Writes the results of `assess` into a folder that exists: everything but dipoles.csv, which is streamed by <see cref="DipolesCsv"/>.</summary>
public static class ReportWriter
{
    /// <summary>Leaves out dipoles.csv (heeded by the caller).</summary>
    public const string Dipoles = "dipoles";

    /// <summary>Leaves out the folder `figures`; the report still shows them.</summary>
    public const string Figures = "figures";

    /// <summary>Leaves out report.html.</summary>
    public const string Report = "report";

    /// <summary>Loads and runs what drawing needs whatever is drawn: font, plotting library, its native code. Only saves time; may run beside anything.</summary>
    public static void Warm()
    {
        using FigureSheet sheet = new(64, 64, 8, 8, 8, 8);
        sheet.Limits(0, 1, 0, 1);
        sheet.BottomAxis([(0, "0"), (1, "1")]);
        sheet.Over(pen => pen.Text("a", pen.Left, pen.Bottom));
        InlineFigure.Svg(sheet, "w", "", "");
        sheet.Png();
    }

    /// <summary>Writes assessment.json, regions.csv, variants.csv where the study has variants, figures/*.svg and .png, report.html.</summary>
    /// <param name="assessment">What to write.</param>
    /// <param name="folder">An existing folder, usually <see cref="ResultFolder.Folder"/>.</param>
    /// <param name="without">Any of <see cref="Figures"/> and <see cref="Report"/>; other words are ignored here.</param>
    /// <param name="cancel">Checked between files.</param>
    /// <returns>The number of files written.</returns>
    public static int Write(Assessment assessment, string folder, IReadOnlySet<string> without, CancellationToken cancel = default)
    {
        bool figures = !without.Contains(Figures), report = !without.Contains(Report);
        FigureDrawings? drawings = figures || report ? FigureDrawings.Begin(assessment, figures, report, cancel) : null;
        int files = 2;
        File.WriteAllBytes(Path.Combine(folder, "assessment.json"), AssessmentJson.Bytes(assessment));
        File.WriteAllText(Path.Combine(folder, "regions.csv"), RegionsCsv.Text(assessment));
        if (assessment.Variants.Count > 0)
        {
            File.WriteAllText(Path.Combine(folder, "variants.csv"), RegionsCsv.Variants(assessment));
            files++;
        }

        if (report)
        {
            // First: the page's own text is written while others draw.
            File.WriteAllText(Path.Combine(folder, "report.html"), HtmlReport.Text(assessment, figures, drawings!));
            files++;
        }

        if (figures)
        {
            string place = Directory.CreateDirectory(Path.Combine(folder, "figures")).FullName;
            for (int k = 0; k < drawings!.Figures.Count; k++)
            {
                cancel.ThrowIfCancellationRequested();
                string name = Path.Combine(place, drawings.Figures[k].Name);
                File.WriteAllText(name + ".svg", drawings.Svg(k));
                File.WriteAllBytes(name + ".png", drawings.Png(k));
                files += 2;
            }
        }

        return files;
    }
}
