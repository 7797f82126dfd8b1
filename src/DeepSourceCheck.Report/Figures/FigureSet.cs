using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Report.Figures;

/// <summary>All figures of an assessment, in the order of the page.</summary>
public static class FigureSet
{
    /// <summary>Figures of one response: trials by each rule, the rules side by side, variants, unknowns, electrodes, power, SNR, spectra of the noise, the cortical comparison.</summary>
    public static IReadOnlyList<Figure> Of(Assessment assessment, int response)
    {
        ResponseResult result = assessment.Responses[response];
        assessment = assessment.For(result);
        string suffix = assessment.Responses.Count > 1 ? $"-{response + 1}" : "";
        string[] rules = [.. assessment.Study.Targets.Select(Names.Of).Concat(result.Regions.SelectMany(r => r.Verdicts).Select(v => v.Rule)).Distinct()];
        List<Figure?> figures = [];
        for (int k = 0; k < rules.Length; k++)
        {
            figures.Add(TrialsFigure.Make(assessment, result, rules[k], k == 0 ? $"trials{suffix}" : $"trials-{rules[k].Replace('_', '-')}{suffix}"));
        }

        figures.Add(RuleFigure.Make(assessment, result, $"rules{suffix}"));
        figures.Add(VariantFigure.Make(assessment, result, $"variants{suffix}"));
        figures.Add(UnknownsFigure.Make(assessment, result, $"unknowns{suffix}"));
        figures.Add(ElectrodesFigure.Make(assessment, result, rules[0], $"electrodes{suffix}"));
        figures.Add(PowerFigure.Make(assessment, result, $"power{suffix}"));
        figures.Add(SnrFigure.Make(assessment, result, $"snr{suffix}"));
        figures.Add(SpectraFigure.Make(result, $"spectra{suffix}"));
        figures.Add(CortexFigure.Make(result, $"cortex{suffix}"));
        return [.. figures.OfType<Figure>()];
    }

    /// <summary>Every figure of every response, then the geometry.</summary>
    public static IReadOnlyList<Figure> All(Assessment assessment)
    {
        List<Figure> figures = [.. Enumerable.Range(0, assessment.Responses.Count).SelectMany(k => Of(assessment, k))];
        if (GeometryFigure.Make(assessment, "geometry") is { } geometry)
        {
            figures.Add(geometry);
        }

        return figures;
    }
}
