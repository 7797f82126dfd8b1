using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Report.Answers;

using SkiaSharp;

namespace DeepSourceCheck.Report.Figures;

/// <summary>Noise by cause over frequency at the readings of the verdicts, with the response over its band and what the sensors pass; a panel a modality.</summary>
public static class SpectraFigure
{
    private const float Left = 58, Top = 30, Plot = 190, Gap = 62, Below = 50, LabelGap = 15;

    // A cause that lies further below the total than this everywhere is not worth a longer axis: so many decades are drawn below the highest total.
    private const double MostDecades = 4.5;

    /// <summary>The figure of one response; null where it has no spectra.</summary>
    public static Figure? Make(ResponseResult response, string name)
    {
        IReadOnlyList<ReadingSpectrum> spectra = response.Spectra;
        if (spectra.Count == 0)
        {
            return null;
        }

        Band band = response.Response.Band;
        string title = $"Over {Hertz(band)} {string.Join(", ", spectra.Select(Finding))}";
        bool trough = response.Response.Measured == Measured.PeakToTrough;
        return new Figure(
            name, title,
            "Amplitude density against frequency (Hz)",
            $"{response.Response.Name}, {response.Regions[0].Region}, at {string.Join(" and ", spectra.Select(s => $"{Names.Of(s.Modality)} {s.Channel}"))}; one trial. Lines: noise by cause, at {spectra[0].Frequencies.Count} frequencies; none where a table ends or a cause has nothing left. "
            + "Shaded: the response's band. Filled: the response, "
            + (spectra.Any(s => s.SignalDensities is not null) ? "the amplitude density of its waveform" : $"its predicted peak ({Say.Strength(response)}, {Say.Direction(response.Response.Direction)}, median dipole) over {(trough ? "sqrt(2) and " : "")}the root of the bandwidth, so that its height over a flat noise is the amplitude SNR of one trial")
            + $".{(spectra.Any(s => s.Bandwidth is not null) ? " Upright lines: the band that the sensors pass." : "")}",
            $"{title}. {string.Join(" ", spectra.Select(s => $"{Names.Of(s.Modality)} {s.Channel}: response {(s.SignalLevel is { } level ? Say.Two(level) : "silent")}, noise {Middle(s)} {Unit(s)} in the middle of the band."))}",
            Table(spectra), FullWidth: false,
            width => Draw(width, spectra));
    }

    // The cause with the largest share of the variance in the band.
    private static string Finding(ReadingSpectrum spectrum)
    {
        NoiseCurve most = spectrum.Noise.MaxBy(c => c.Share)!;
        string modality = $"{Names.Of(spectrum.Modality)} noise is";
        return NoiseModel.IsWhole(most.Cause) ? $"{modality} {most.Cause}"
            : most.Share > 0.995 ? $"{modality} {most.Cause}" : $"{modality} {(most.Share >= 0.5 ? "mostly" : "first of all")} {most.Cause} ({Say.Percent(Math.Round(most.Share, 2))})";
    }

    private static string Unit(ReadingSpectrum spectrum) => Say.Unit(spectrum.Unit).Replace("sqrt(Hz)", "√Hz", StringComparison.Ordinal);

    private static string Hertz(Band band) => $"{Say.Stated(band.Low)} to {(band.High >= 1000 && band.High % 1 == 0 ? Say.Count((long)band.High) : Say.Stated(band.High))} Hz";

    private static string Middle(ReadingSpectrum spectrum)
    {
        double middle = Math.Sqrt(Math.Max(spectrum.Band.Low, spectrum.Frequencies[0]) * spectrum.Band.High);
        int nearest = Enumerable.Range(0, spectrum.Frequencies.Count).MinBy(k => Math.Abs(Math.Log(spectrum.Frequencies[k] / middle)));
        return spectrum.Total[nearest] is { } density ? Say.Two(density) : "unknown";
    }

    private static FigureTable Table(IReadOnlyList<ReadingSpectrum> spectra)
    {
        string[] causes = [.. spectra.SelectMany(s => s.Noise).Select(c => c.Cause).Distinct()];
        return new(
            ["reading", "unit", "Hz", "total", .. causes],
            [.. from s in spectra
                from k in Enumerable.Range(0, s.Frequencies.Count)
                select (IReadOnlyList<string>)
                [
                    $"{Names.Of(s.Modality)} {s.Channel}", Unit(s), Say.Significant(s.Frequencies[k], 3), Cell(s.Total[k]), .. causes.Select(c => Cell(s.Noise.FirstOrDefault(n => n.Cause == c)?.Densities[k])),
                ]]);

        static string Cell(double? density) => density is { } d ? Say.Significant(d, 3) : "";
    }

    private static FigureSheet Draw(int width, IReadOnlyList<ReadingSpectrum> spectra)
    {
        float right = width < 480 ? 92 : 146;
        FigureSheet sheet = new(width, (int)(Top + spectra.Count * Plot + (spectra.Count - 1) * Gap + Below), Left, right, Top, Below);
        sheet.Limits(0, 1, 0, 1);
        sheet.Over(pen =>
        {
            for (int k = 0; k < spectra.Count; k++)
            {
                float top = Top + k * (Plot + Gap);
                new Panel(pen, spectra[k], new SKRect(Left, top, width - right, top + Plot), right - 12).Draw();
            }
        });
        return sheet;
    }

    /// <summary>Vertical axis of a panel: the response, the total, and what lies not too far below it.</summary>
    internal static LogAxis Densities(ReadingSpectrum spectrum)
    {
        double highest = spectrum.Total.OfType<double>().DefaultIfEmpty(1).Max(), least = highest * Math.Pow(10, -MostDecades);
        IEnumerable<double> shown = spectrum.Total.OfType<double>().Concat(spectrum.Noise.SelectMany(c => c.Densities).OfType<double>()).Where(d => d >= least);
        return new LogAxis(shown.Append(spectrum.SignalLevel ?? double.NaN).Concat((spectrum.SignalDensities ?? []).Where(d => d >= least)));
    }

    private sealed class Panel(FigurePen pen, ReadingSpectrum spectrum, SKRect area, float labelRoom)
    {
        private readonly LogAxis _densities = Densities(spectrum);
        private readonly List<(float Y, string Text, bool SemiBold)> _labels = [];

        private double From => Math.Log10(spectrum.Frequencies[0]);

        private double To => Math.Log10(spectrum.Frequencies[^1]);

        public void Draw()
        {
            Washes();
            Axes();
            Response();
            foreach (NoiseCurve curve in spectrum.Noise.Where(c => !NoiseModel.IsWhole(c.Cause)))
            {
                (float[] pattern, SKColor colour, float width) = Style(curve.Cause);
                Curve(curve.Densities, pattern, colour, width, curve.Cause == "muscle and electrode" ? "muscle, electrode" : curve.Cause, false);
            }

            Curve(spectrum.Total, [], Palette.Ink, 2.2f, spectrum.Noise is [{ Cause: var cause }] && NoiseModel.IsWhole(cause) ? cause : "total", true);
            Labels();
        }

        private static (float[] Pattern, SKColor Colour, float Width) Style(string cause) => cause switch
        {
            "instrument" => ([], Palette.Ink2, 1),
            "brain" => ([2, 3], Palette.Ink, 1.8f),
            "environment" => ([2, 3, 9, 3], Palette.Ink2, 1.4f),
            _ => ([7, 4], Palette.Ink2, 1.4f),
        };

        private float X(double frequency) => (float)(area.Left + (Math.Log10(frequency) - From) / (To - From) * area.Width);

        private float Y(double density) => (float)(area.Bottom - (Math.Log10(density) - _densities.Low) / (_densities.High - _densities.Low) * area.Height);

        private float Clamped(double frequency) => frequency <= spectrum.Frequencies[0] ? area.Left : frequency >= spectrum.Frequencies[^1] ? area.Right : X(frequency);

        private void Washes() => pen.Rectangle(Clamped(spectrum.Band.Low), area.Top, Clamped(spectrum.Band.High), area.Bottom, Palette.Beyond);

        private void Axes()
        {
            pen.Text($"{Names.Of(spectrum.Modality)} {FigurePen.Fit(spectrum.Channel, 160, FigurePen.Label, true)}, {Unit(spectrum)}", area.Left - 42, area.Top - 12, semiBold: true);
            foreach (int decade in _densities.Decades)
            {
                float y = Y(Math.Pow(10, decade));
                pen.Line(area.Left, y, area.Right, y, Palette.Hair, 1);
                pen.Text(LogAxis.Label(decade), area.Left - 6, y + 4, FigurePen.Small, Anchor.End, colour: Palette.Ink2);
            }

            pen.Line(area.Left, area.Bottom, area.Right, area.Bottom, Palette.Edge, 1);
            LogAxis hertz = new([spectrum.Frequencies[0], spectrum.Frequencies[^1]]);
            foreach (int decade in hertz.Decades.Where(d => d >= From - 1e-9 && d <= To + 1e-9))
            {
                float x = X(Math.Pow(10, decade));
                pen.Line(x, area.Bottom, x, area.Bottom + 4, Palette.Edge, 1);
                pen.Text(LogAxis.Label(decade), x, area.Bottom + 17, FigurePen.Small, Anchor.Middle, colour: Palette.Ink2);
            }

            pen.Text("Hz", area.Right + 8, area.Bottom + 17, FigurePen.Small, colour: Palette.Ink2);
            foreach (double edge in spectrum.Bandwidth is { } passed ? new[] { passed.Low, passed.High } : [])
            {
                if (edge > spectrum.Frequencies[0] && edge < spectrum.Frequencies[^1])
                {
                    pen.Line(X(edge), area.Top, X(edge), area.Bottom, Palette.Edge, 2);
                    pen.Text($"sensors {(edge == spectrum.Bandwidth!.Value.Low ? "from" : "to")} {Say.Stated(edge)} Hz", X(edge) + (edge == spectrum.Bandwidth!.Value.Low ? 5 : -5), area.Top + 12, FigurePen.Small, edge == spectrum.Bandwidth!.Value.Low ? Anchor.Start : Anchor.End, colour: Palette.Ink2, halo: true);
                }
            }
        }

        private void Response()
        {
            SKColor filled = Palette.Of(spectrum.Modality).WithAlpha(71);
            if (spectrum.SignalDensities is { } densities)
            {
                SKPoint[] line = [.. Enumerable.Range(0, densities.Count).Where(k => densities[k] > 0 && Y(densities[k]) < area.Bottom).Select(k => new SKPoint(X(spectrum.Frequencies[k]), Y(densities[k])))];
                if (line.Length > 1)
                {
                    pen.Area([new(line[0].X, area.Bottom), .. line, new(line[^1].X, area.Bottom)], filled);
                    pen.Curve(line, spectrum.Modality);
                    _labels.Add((line[^1].Y, "response", false));
                }

                return;
            }

            if (spectrum.SignalLevel is { } level)
            {
                float left = Clamped(spectrum.Band.Low), end = Clamped(spectrum.Band.High), y = Y(level);
                pen.Rectangle(left, y, end, area.Bottom, filled);
                pen.Curve([new(left, y), new(end, y)], spectrum.Modality);
                pen.Mark(spectrum.Modality, (left + end) / 2, y, scale: 0.7f);
                _labels.Add((y, "response", false));
            }
            else
            {
                pen.Text("response: silent in this direction", area.Left + 8, area.Bottom - 8, FigurePen.Small, colour: Palette.Ink2, halo: true);
            }
        }

        // In pieces between the frequencies where the cause is not known, has nothing left or lies below the axis.
        private void Curve(IReadOnlyList<double?> densities, float[] pattern, SKColor colour, float width, string label, bool semiBold)
        {
            List<SKPoint> piece = [];
            float? last = null;
            for (int k = 0; k <= densities.Count; k++)
            {
                if (k < densities.Count && densities[k] is { } d && Math.Log10(d) >= _densities.Low)
                {
                    piece.Add(new(X(spectrum.Frequencies[k]), Y(d)));
                    last = piece[^1].Y;
                    continue;
                }

                if (piece.Count > 1)
                {
                    pen.Trace(piece, pattern, colour, width);
                }

                piece = [];
            }

            if (last is { } y)
            {
                _labels.Add((y, label, semiBold));
            }
        }

        // Beside the ends of the lines, a line of text apart at least, none below the axis.
        private void Labels()
        {
            (float Y, string Text, bool SemiBold)[] sorted = [.. _labels.OrderBy(l => l.Y)];
            var at = new float[sorted.Length];
            for (int k = 0; k < sorted.Length; k++)
            {
                at[k] = Math.Max(sorted[k].Y + 4, k == 0 ? float.NegativeInfinity : at[k - 1] + LabelGap);
            }

            for (int k = sorted.Length - 1; k >= 0; k--)
            {
                at[k] = Math.Min(at[k], k == sorted.Length - 1 ? area.Bottom - 1 : at[k + 1] - LabelGap);
                pen.Text(FigurePen.Fit(sorted[k].Text, labelRoom, FigurePen.Small, sorted[k].SemiBold), area.Right + 6, at[k], FigurePen.Small, semiBold: sorted[k].SemiBold, halo: true);
            }
        }
    }
}
