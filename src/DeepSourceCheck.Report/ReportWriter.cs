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

    /// <summary>Writes assessment.json, regions.csv, variants.csv where the study has variants, figures/*.svg and .png, report.html.</summary>
    /// <param name="assessment">What to write.</param>
    /// <param name="folder">An existing folder, usually <see cref="ResultFolder.Folder"/>.</param>
    /// <param name="without">Any of <see cref="Figures"/> and <see cref="Report"/>; other words are ignored here.</param>
    /// <param name="cancel">Checked between files.</param>
    /// <returns>The number of files written.</returns>
    public static int Write(Assessment assessment, string folder, IReadOnlySet<string> without, CancellationToken cancel = default)
    {
        int files = 2;
        File.WriteAllBytes(Path.Combine(folder, "assessment.json"), AssessmentJson.Bytes(assessment));
        File.WriteAllText(Path.Combine(folder, "regions.csv"), RegionsCsv.Text(assessment));
        if (assessment.Variants.Count > 0)
        {
            File.WriteAllText(Path.Combine(folder, "variants.csv"), RegionsCsv.Variants(assessment));
            files++;
        }

        bool figures = !without.Contains(Figures);
        if (figures)
        {
            string place = Directory.CreateDirectory(Path.Combine(folder, "figures")).FullName;
            foreach (Figure figure in FigureSet.All(assessment))
            {
                cancel.ThrowIfCancellationRequested();
                using FigureSheet sheet = figure.Draw(figure.FileWidth);
                File.WriteAllText(Path.Combine(place, figure.Name + ".svg"), FigureFile.Svg(figure, sheet));
                File.WriteAllBytes(Path.Combine(place, figure.Name + ".png"), sheet.Png());
                files += 2;
            }
        }

        cancel.ThrowIfCancellationRequested();
        if (!without.Contains(Report))
        {
            File.WriteAllText(Path.Combine(folder, "report.html"), HtmlReport.Text(assessment, figures));
            files++;
        }

        return files;
    }
}
