using System.Globalization;
using System.Text.Json;
using System.Text.RegularExpressions;
using System.Xml.Linq;

using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Report.Figures;
using DeepSourceCheck.Report.Tables;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Report;

public partial class SpectraFigureTests
{
    // Coordinates are written with some four decimals over some 200 px.
    private const double Pixels = 0.02;

    private static readonly XNamespace Svg = "http://www.w3.org/2000/svg";

    private static Figure Of(Assessment a) => FigureSet.All(a).Single(f => f.Name == "spectra");

    [Fact]
    public void Title_SaysWhichCauseCarriesTheBand()
    {
        Figure figure = Of(AssessmentFixture.WithSpectra());
        Assert.Equal("Over 100 to 1,500 Hz EEG noise is mostly muscle and electrode (65 %), MEG noise is mostly instrument (90 %)", figure.Title);
        Assert.Contains("EEG Cz-mastoids and MEG M192", figure.Conditions, StringComparison.Ordinal);
        Assert.Contains("3.5 nAm", figure.Conditions, StringComparison.Ordinal);
        Assert.Contains("the band that the sensors pass", figure.Conditions, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData(Figure.ColumnWidth)]
    [InlineData(Figure.PhoneWidth)]
    public void Lines_AreThoseOfTheAssessment_PointByPoint(int width)
    {
        Assessment a = AssessmentFixture.WithSpectra();
        using FigureSheet sheet = Of(a).Draw(width);
        (double X, double Y)[][] totals = [.. Lines(sheet, "2.2")];
        Assert.Equal(2, totals.Length);
        foreach ((ReadingSpectrum spectrum, (double X, double Y)[] line) in a.Responses[0].Spectra.Zip(totals))
        {
            Assert.Equal(spectrum.Frequencies.Count, line.Length);
            // Both axes are logarithmic: pixels are linear in the logarithms, with one scale a panel, found from the axis alone.
            LogAxis axis = SpectraFigure.Densities(spectrum);
            double scale = 190 / (axis.High - axis.Low);
            for (int k = 1; k < line.Length; k++)
            {
                Assert.Equal(-scale * Math.Log10(spectrum.Total[k]!.Value / spectrum.Total[0]!.Value), line[k].Y - line[0].Y, Pixels);
                Assert.Equal((line[^1].X - line[0].X) * Math.Log(spectrum.Frequencies[k]) / Math.Log(3000), line[k].X - line[0].X, Pixels);
            }
        }
    }

    [Fact]
    public void Line_IsBroken_WhereACauseIsNotKnown_AndNeverDrawnBeyond()
    {
        Assessment a = AssessmentFixture.WithSpectra();
        using FigureSheet sheet = Of(a).Draw(Figure.ColumnWidth);
        // The instrument's thin full lines span the panel; the brain of MEG, dotted, ends where its table does.
        (double X, double Y)[] full = Lines(sheet, "1").First(l => l.Length == 40);
        double end = Lines(sheet, "1.8").SelectMany(l => l).Where(p => p.Y > 250).Max(p => p.X);
        double last = a.Responses[0].Spectra[1].Frequencies.Last(f => f <= 2000);
        Assert.Equal(full[0].X + (full[^1].X - full[0].X) * Math.Log(last) / Math.Log(3000), end, 3.0);     // a gap of the dots at most
    }

    [Fact]
    public void Table_HoldsEveryFrequencyOfEveryReading()
    {
        Figure figure = Of(AssessmentFixture.WithSpectra());
        Assert.Equal(["reading", "unit", "Hz", "total", "instrument", "brain", "muscle and electrode"], figure.Table.Columns);
        Assert.Equal(80, figure.Table.Rows.Count);
        Assert.Equal(["EEG Cz-mastoids", "µV/√Hz", "1.00", "4.02", "0.0200", "4.00", ""], figure.Table.Rows[0]);
    }

    [Fact]
    public void SilentResponse_IsSaid_NotDrawn()
    {
        Assessment a = AssessmentFixture.WithSpectra();
        ResponseResult silent = a.Responses[0] with { Spectra = [.. a.Responses[0].Spectra.Select(s => s with { SignalLevel = null })] };
        Figure figure = Of(a with { Responses = [silent] });
        Assert.Contains("response silent", figure.Alt, StringComparison.Ordinal);
        using FigureSheet sheet = figure.Draw(Figure.ColumnWidth);
        Assert.Empty(Lines(sheet, "3"));
        using FigureSheet audible = Of(a).Draw(Figure.ColumnWidth);
        Assert.NotEmpty(Lines(audible, "3"));
    }

    [Fact]
    public void KnownWaveform_IsDrawnAsItsSpectrum()
    {
        Assessment a = AssessmentFixture.WithSpectra();
        ReadingSpectrum eeg = a.Responses[0].Spectra[0];
        ReadingSpectrum known = eeg with { SignalDensities = [.. eeg.Frequencies.Select(f => 0.01 * Math.Exp(-Math.Pow(Math.Log(f / 400), 2)))] };
        Figure figure = Of(a with { Responses = [a.Responses[0] with { Spectra = [known] }] });
        Assert.Contains("the amplitude density of its waveform", figure.Conditions, StringComparison.Ordinal);
        using FigureSheet sheet = figure.Draw(Figure.ColumnWidth);
        (double X, double Y) top = Lines(sheet, "3").Single().MinBy(p => p.Y), total = Lines(sheet, "2.2").Single()[Enumerable.Range(0, 40).MaxBy(k => known.SignalDensities![k])];
        Assert.Equal(total.X, top.X, Pixels);
    }

    [Fact]
    public void Json_HoldsTheSpectra_AndWhatRemovalDoes()
    {
        Assessment a = AssessmentFixture.WithSpectra();
        using JsonDocument json = JsonDocument.Parse(AssessmentJson.Bytes(a));
        JsonElement response = json.RootElement.GetProperty("responses")[0], meg = response.GetProperty("noise_spectra")[1];
        ReadingSpectrum expected = a.Responses[0].Spectra[1];
        const double sixDigits = 5.1e-6;
        Assert.Equal("M192", meg.GetProperty("channel").GetString());
        Assert.Equal([0.0, 2000], meg.GetProperty("bandwidth_Hz").EnumerateArray().Select(e => e.GetDouble()));
        Assert.Equal(0.067, meg.GetProperty("response_level").GetDouble());
        Assert.Equal(40, meg.GetProperty("frequency_Hz").GetArrayLength());
        for (int k = 0; k < 40; k++)
        {
            RelativeAssert.Equal(expected.Frequencies[k], meg.GetProperty("frequency_Hz")[k].GetDouble(), sixDigits);
            RelativeAssert.Equal(expected.Total[k]!.Value, meg.GetProperty("total")[k].GetDouble(), sixDigits);
        }

        Assert.Equal(JsonValueKind.Null, meg.GetProperty("causes")[1].GetProperty("density")[39].ValueKind);
        Assert.Equal(0.9, meg.GetProperty("causes")[0].GetProperty("share_of_band").GetDouble());
        JsonElement removal = response.GetProperty("regions")[0].GetProperty("environment_removal");
        Assert.Equal((-1.25, -0.5, -0.25, 3.5), (removal.GetProperty("matched_filter_db").GetDouble(), removal.GetProperty("best_channel_db").GetDouble(),
            removal.GetProperty("matched_filter_against_left_in_db").GetDouble(), removal.GetProperty("best_channel_against_left_in_db").GetDouble()));
        Assert.False(response.GetProperty("regions")[1].TryGetProperty("environment_removal", out _));
    }

    // Open paths of a stroke width, as lists of pixels in the order in which they were drawn; each once, the plot being rendered twice.
    private static IEnumerable<(double X, double Y)[]> Lines(FigureSheet sheet, string width)
    {
        foreach (XElement path in XElement.Parse(sheet.Svg("t")).Descendants(Svg + "path").DistinctBy(p => ((string?)p.Attribute("d"), (string?)p.Attribute("stroke"))))
        {
            string d = (string?)path.Attribute("d") ?? "";
            string stroke = (string?)path.Attribute("stroke-width") ?? ((string?)path.Attribute("stroke") is { } s && s != "none" ? "1" : "");
            if (stroke == width && (string?)path.Attribute("fill") == "none" && !d.Contains('z', StringComparison.OrdinalIgnoreCase))
            {
                double[] numbers = [.. Numbers().Matches(d).Select(m => double.Parse(m.Value, CultureInfo.InvariantCulture))];
                yield return [.. Enumerable.Range(0, numbers.Length / 2).Select(k => (numbers[2 * k], numbers[2 * k + 1]))];
            }
        }
    }

    [GeneratedRegex(@"-?\d+(\.\d+)?([eE][-+]?\d+)?")]
    private static partial Regex Numbers();
}
