using System.Xml.Linq;

using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Report;
using DeepSourceCheck.Report.Figures;
using DeepSourceCheck.Tests.Support;

using SkiaSharp;

namespace DeepSourceCheck.Tests.Report;

public class FigureTests
{
    public static TheoryData<string> All => PresentationTests.All;

    [Fact]
    public void Font_ShipsInsideTheProgram_WithItsSigns()
    {
        Assert.Equal(FigureFont.Family, FigureFont.Regular.FamilyName);
        Assert.Equal(FigureFont.Family, FigureFont.SemiBold.FamilyName);
        const string Signs = "0123456789,.−×µμ%°≥≤√ΦΩ…()[]{}/+-=;:'\"ABCXYZabcxyzäéßñçøžłαβ²";
        foreach (SKTypeface face in new[] { FigureFont.Regular, FigureFont.SemiBold })
        {
            using SKFont font = new(face, 12);
            Assert.All(Signs, sign => Assert.True(font.GetGlyph(sign) != 0, $"no glyph for {sign}"));
        }
    }

    [Fact]
    public void Digits_AreEquallyWide() =>
        Assert.Single("0123456789".Select(d => FigurePen.Width(d.ToString(), 100)).Distinct());

    [Theory]
    [MemberData(nameof(All))]
    public void Svg_IsOutlinesOnly_WellFormedAndSelfSufficient(string fixture)
    {
        foreach (Figure figure in FigureSet.All(PresentationTests.AllFixtures[fixture]()))
        {
            foreach (int width in new[] { figure.FileWidth, Figure.PhoneWidth })
            {
                using FigureSheet sheet = figure.Draw(width);
                XElement root = XElement.Parse(FigureFile.Svg(figure, sheet));
                XNamespace svg = "http://www.w3.org/2000/svg";
                Assert.Empty(root.Descendants(svg + "text"));
                Assert.Empty(root.Descendants(svg + "image"));
                HashSet<string> ids = [.. root.Descendants().Select(e => (string?)e.Attribute("id")).OfType<string>()];
                string[] uses = [.. root.Descendants(svg + "use").Select(e => (string)e.Attribute("href")!)];
                Assert.NotEmpty(uses);
                Assert.All(uses, use => Assert.Contains(use[1..], ids));
                Assert.Equal(figure.Title, root.Element(svg + "title")!.Value);
                Assert.Equal(width.ToString(System.Globalization.CultureInfo.InvariantCulture), (string)root.Attribute("width")!);
            }
        }
    }

    [Theory]
    [InlineData("default")]
    [InlineData("silent")]
    public void Figures_DrawnTwice_AreTheSameBytes(string fixture)
    {
        IReadOnlyList<Figure> first = FigureSet.All(PresentationTests.AllFixtures[fixture]()), second = FigureSet.All(PresentationTests.AllFixtures[fixture]());
        Assert.Equal(first.Select(f => f.Name), second.Select(f => f.Name));
        foreach ((Figure a, Figure b) in first.Zip(second))
        {
            using FigureSheet x = a.Draw(a.FileWidth), y = b.Draw(b.FileWidth);
            Assert.Equal(x.Svg("g"), y.Svg("g"));
            Assert.Equal(x.Png(), y.Png());
        }
    }

    [Fact]
    public void Png_IsTwiceTheSize()
    {
        Figure figure = FigureSet.All(AssessmentFixture.Default())[0];
        using FigureSheet sheet = figure.Draw(figure.FileWidth);
        using SKBitmap bitmap = SKBitmap.Decode(sheet.Png());
        Assert.Equal((2 * sheet.Width, 2 * sheet.Height), (bitmap.Width, bitmap.Height));
    }

    [Theory]
    [MemberData(nameof(All))]
    public void Figures_StateQuantityConditionsAndKeyNumbers(string fixture)
    {
        foreach (Figure figure in FigureSet.All(PresentationTests.AllFixtures[fixture]()))
        {
            Assert.StartsWith(figure.Title, figure.Alt, StringComparison.Ordinal);
            Assert.NotEmpty(figure.Conditions);
            Assert.All(figure.Table.Rows, row => Assert.Equal(figure.Table.Columns.Count, row.Count));
        }
    }

    [Fact]
    public void Geometry_OfAVoxelHead_DrawsItsOutlines_AndSpeaksOfNoCircles()
    {
        Figure geometry = FigureSet.All(AssessmentFixture.Voxels()).Single(f => f.Name == "geometry"), sphere = FigureSet.All(AssessmentFixture.Default()).Single(f => f.Name == "geometry");
        Assert.Contains("Outlines: scalp, bone (shaded), brain where planes through", geometry.Conditions, StringComparison.Ordinal);
        Assert.DoesNotContain("Circles", geometry.Conditions, StringComparison.Ordinal);
        Assert.DoesNotContain("imported", geometry.Conditions, StringComparison.Ordinal);
        Assert.Equal(sphere.Title, geometry.Title);
        using FigureSheet sheet = geometry.Draw(geometry.FileWidth);
        XNamespace svg = "http://www.w3.org/2000/svg";

        // One shape a surface and view, and the shaded bone once more as an area.
        XElement[] shapes = [.. XElement.Parse(FigureFile.Svg(geometry, sheet)).Descendants(svg + "path").Where(p => ((string?)p.Attribute("d"))?.Count(c => c is 'L' or 'l') >= 50).DistinctBy(p => ((string?)p.Attribute("fill"), (string?)p.Attribute("d")))];
        Assert.True(shapes.Length >= 3 * 4, $"{shapes.Length}");
        Assert.Equal(3, shapes.Count(p => ((string?)p.Attribute("fill"))?.Equals(Palette.Hex(Palette.Beyond), StringComparison.OrdinalIgnoreCase) == true));
    }

    [Fact]
    public void PowerFigure_NeverDrawsPowerForAnAmplitudeRatio()
    {
        Figure power = FigureSet.All(AssessmentFixture.Default()).Single(f => f.Name == "power");
        Assert.Contains("An amplitude ratio has no power", power.Conditions, StringComparison.Ordinal);
        Assert.Contains("alpha 0.01", power.Conditions, StringComparison.Ordinal);
    }

    // Reference: ((z_0.99 + z_0.9)/d)^2 with z_0.99 = 2.3263478740, z_0.9 = 1.2815515655 (tables of the normal distribution, from memory).
    [Fact]
    public void PowerCurve_ReachesThePowerAtTheKnownCount()
    {
        const double TableDigits = 1e-9;
        DetectionRule test = new(0.01, 0.9, 1);
        double expected = Math.Pow(2.3263478740 + 1.2815515655, 2);
        RelativeAssert.Equal(expected, DetectionCurve.Trials(n => test.Probability(1, 0, n)!.Value, 0.9), TableDigits);
        RelativeAssert.Equal(1000 * expected, DetectionCurve.Trials(n => test.Probability(1e-3, 0, n)!.Value, 0.9), TableDigits);
        Assert.Equal(double.PositiveInfinity, DetectionCurve.Trials(_ => 0.01, 0.9));
    }

    // The curve crosses the power asked for where the rule counts, whatever the rule; that of known pattern and noise crosses elsewhere.
    [Theory]
    [InlineData("steady")]
    [InlineData("plane")]
    [InlineData("student")]
    [InlineData("hotelling")]
    public void PowerFigure_CrossesAtTheCountOfTheVerdictsOwnTest(string name)
    {
        ITargetRule test = name switch
        {
            "steady" => new SteadyStateRule(0.01, 0.9, 1),
            "plane" => new SubspaceDetectionRule(0.01, 0.9, 1, 2),
            "student" => new StudentDetectionRule(0.01, 0.9, 1),
            _ => new HotellingRule(0.01, 0.9, 1, 30),
        };
        AssessmentFixture.Options options = new() { Detection = true, Test = test };
        Assessment assessment = AssessmentFixture.Build(options);
        Figure power = FigureSet.All(assessment).Single(f => f.Name == "power");
        Assert.Contains(test.Description, power.Conditions, StringComparison.Ordinal);
        RegionResult region = assessment.Responses[0].Regions[0];
        VerdictResult verdict = region.Verdicts.First(v => v.Modality == Modality.Eeg && v.Power is not null);
        double snr = Math.Pow(10, region.Find(verdict.Modality, verdict.Direction, verdict.Measure)!.SnrDb.P50!.Value / 10);
        string count = TrialCount.Ceiling(test.Trials(snr))!.Value.ToString("N0", System.Globalization.CultureInfo.InvariantCulture);
        Assert.Contains(power.Table.Rows, r => r[0] == "EEG" && r[1].StartsWith("90", StringComparison.Ordinal) && r[2] == count);
        Assert.NotEqual(TrialCount.Ceiling(new DetectionRule(0.01, 0.9, 1).Trials(snr)), TrialCount.Ceiling(test.Trials(snr)));
        using FigureSheet sheet = power.Draw(power.FileWidth);
    }

    [Fact]
    public void Palette_IsThatOfTheStylesheet()
    {
        IReadOnlyDictionary<string, string> light = StylesheetColours.Blocks()[0];
        Assert.All(Palette.Tokens, t => Assert.Equal(Palette.Hex(t.Colour), light[t.Token]));
    }

    [Fact]
    public void Writer_WritesEveryFileAndHeedsWithout()
    {
        string folder = Directory.CreateTempSubdirectory("report-").FullName;
        try
        {
            int files = ReportWriter.Write(AssessmentFixture.Default(), folder, new HashSet<string>());
            string[] names = [.. Directory.EnumerateFiles(folder, "*", SearchOption.AllDirectories).Select(p => Path.GetRelativePath(folder, p).Replace('\\', '/')).Order(StringComparer.Ordinal)];
            Assert.Equal(
                ["assessment.json", "figures/geometry.png", "figures/geometry.svg", "figures/power.png", "figures/power.svg", "figures/snr.png", "figures/snr.svg", "figures/trials.png", "figures/trials.svg", "regions.csv", "report.html"],
                names);
            Assert.Equal(names.Length, files);
            Directory.Delete(folder, recursive: true);
            Directory.CreateDirectory(folder);
            Assert.Equal(2, ReportWriter.Write(AssessmentFixture.Default(), folder, new HashSet<string> { "figures", "report" }));
            Assert.Equal(2, Directory.EnumerateFileSystemEntries(folder).Count());
        }
        finally
        {
            Directory.Delete(folder, recursive: true);
        }
    }
}
