using System.Text.RegularExpressions;
using System.Xml.Linq;

using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Report.Answers;
using DeepSourceCheck.Report.Html;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Report;

public class HtmlReportTests
{
    // WCAG 2.2, success criteria 1.4.3 and 1.4.11.
    private const double LeastForText = 4.5;
    private const double LeastForMarks = 3.0;

    public static TheoryData<string> All => PresentationTests.All;

    private static XElement Page(Assessment a, bool files = true)
    {
        string html = HtmlReport.Text(a, files);
        Assert.StartsWith("<!DOCTYPE html>\n", html, StringComparison.Ordinal);
        return XElement.Parse(html["<!DOCTYPE html>\n".Length..], LoadOptions.PreserveWhitespace);
    }

    [Theory]
    [MemberData(nameof(All))]
    public void Page_EveryElementIsClosed_AndIdsAreUnique(string fixture)
    {
        XElement page = Page(PresentationTests.AllFixtures[fixture]());
        string[] ids = [.. page.DescendantsAndSelf().Select(e => (string?)e.Attribute("id")).OfType<string>()];
        Assert.Equal(ids.Length, ids.Distinct().Count());
        string[] within = [.. page.Descendants().Select(e => (string?)e.Attribute("href")).OfType<string>().Where(h => h.StartsWith('#')).Select(h => h[1..])];
        Assert.NotEmpty(within);
        Assert.All(within, target => Assert.Contains(target, ids));
    }

    [Theory]
    [MemberData(nameof(All))]
    public void Page_LoadsNothingFromOutside(string fixture)
    {
        XElement page = Page(PresentationTests.AllFixtures[fixture]());
        Assert.Contains(page.Descendants("meta"), m => (string?)m.Attribute("http-equiv") == "Content-Security-Policy" && ((string)m.Attribute("content")!).StartsWith("default-src 'none'", StringComparison.Ordinal));
        foreach (XAttribute a in page.DescendantsAndSelf().Attributes().Where(a => !a.IsNamespaceDeclaration))
        {
            Assert.DoesNotContain("://", a.Value, StringComparison.Ordinal);
            if (a.Name.LocalName == "href")
            {
                Assert.Matches("^(#|figures/[a-z0-9-]+\\.(svg|png)$)", a.Value);
            }
        }

        Assert.DoesNotContain("url(", HtmlReport.Stylesheet, StringComparison.Ordinal);
        Assert.DoesNotContain("@import", HtmlReport.Stylesheet, StringComparison.Ordinal);
        Assert.Empty(page.Descendants("link"));
        Assert.Empty(page.Descendants("img"));
    }

    [Fact]
    public void Limits_AreThoseOfTheRunsHead_WithItsMethod()
    {
        string voxels = HtmlReport.Text(AssessmentFixture.Voxels(), false), sphere = HtmlReport.Text(AssessmentFixture.Default(), false);
        Assert.Contains("Leadfields: finite elements on 400,000 voxels of 2 mm.", voxels, StringComparison.Ordinal);
        Assert.All(AssessmentFixture.Voxels().Limits, limit => Assert.Contains(limit, voxels, StringComparison.Ordinal));
        Assert.DoesNotContain("concentric", voxels, StringComparison.Ordinal);
        Assert.DoesNotContain("imported", voxels, StringComparison.Ordinal);
        Assert.Contains("concentric", sphere, StringComparison.Ordinal);
        Assert.DoesNotContain("Leadfields:", sphere, StringComparison.Ordinal);
    }

    [Fact]
    public void Page_WithoutFigureFiles_LinksToNone() =>
        Assert.DoesNotContain(Page(AssessmentFixture.Default(), files: false).Descendants(), e => ((string?)e.Attribute("href"))?.StartsWith("figures/", StringComparison.Ordinal) == true);

    [Fact]
    public void Page_EscapesWhatTheStudyWrites()
    {
        const string Nasty = "</title><script>alert(1)</script>\" onload=\"x\" & <b>\u0001";
        Assessment a = AssessmentFixture.Default();
        RegionResult region = a.Responses[0].Regions[0] with { Region = Nasty, Warnings = [Nasty] };
        a = AssessmentJsonTests.With(a, region) with { Study = a.Study with { Title = Nasty, File = Nasty }, Warnings = [Nasty], Inputs = [new(Nasty, Nasty)], Assumptions = [new(Nasty, Nasty, Nasty, true, Nasty, null)] };
        XElement page = Page(a);
        Assert.Single(page.Descendants("script"));
        Assert.DoesNotContain(page.DescendantsAndSelf().Attributes(), x => x.Name.LocalName == "onload");
        Assert.Contains(page.Descendants("b"), e => e.Value.Contains("alert(1)", StringComparison.Ordinal));
    }

    [Theory]
    [MemberData(nameof(All))]
    public void Page_ShowsVerdictsAssumptionsAndAllCautions(string fixture)
    {
        Assessment a = PresentationTests.AllFixtures[fixture]();
        XElement page = Page(a);
        string text = page.Element("body")!.Value;
        Assert.Single(page.Descendants("h1"));
        foreach (ResponseResult response in a.Responses)
        {
            foreach (ModalityAnswer answer in new RegionAnswer(a, response.Response, response.Regions[0]).Answers)
            {
                Assert.Contains(page.Descendants("p"), p => (string?)p.Attribute("class") == "count" && p.Value == answer.Line());
            }

            Assert.All(response.Regions, r => Assert.Contains(r.Region, text, StringComparison.Ordinal));
        }

        Assert.All(a.Assumptions, s => Assert.Contains(s.Key, text, StringComparison.Ordinal));
        Assert.All(Cautions.All, c => Assert.Contains(c.Text, text, StringComparison.Ordinal));
        Assert.All(a.Warnings, w => Assert.Contains(w, text, StringComparison.Ordinal));
        Assert.All(a.Inputs, i => Assert.Contains(i.Sha256, text, StringComparison.Ordinal));
    }

    [Fact]
    public void Cautions_SayWhatTheOwnerAsksFor()
    {
        string all = string.Join(" ", Cautions.All.Select(c => $"{c.Heading} {c.Text}"));
        Assert.All(
            ["planning aid", "no medical device", "no evidence of absence", "not located", "clinical waveform quality", "Hearing loss, age, sedation and medication", "licensed", "local rules", "Stimulus levels"],
            words => Assert.Contains(words, all, StringComparison.OrdinalIgnoreCase));
    }

    [Fact]
    public void Page_SameAssessment_SameBytes() =>
        Assert.Equal(HtmlReport.Text(AssessmentFixture.Default(), true), HtmlReport.Text(AssessmentFixture.Default(), true));

    [Fact]
    public void Page_EveryFigureHasAltTextCaptionAndTable()
    {
        XElement page = Page(AssessmentFixture.Default());
        XElement[] figures = [.. page.Descendants("figure").Where(f => f.Attribute("id") is not null)];
        Assert.Equal(4, figures.Length);
        XNamespace svg = "http://www.w3.org/2000/svg";
        foreach (XElement figure in figures)
        {
            Assert.All(figure.Elements(svg + "svg"), s => Assert.NotEmpty((string)s.Attribute("aria-label")!));
            Assert.Equal(2, figure.Elements(svg + "svg").Count());
            Assert.NotEmpty(figure.Element("figcaption")!.Value);
            Assert.NotEmpty(figure.Descendants("tbody").Single().Elements("tr"));
        }
    }

    [Fact]
    public void Stylesheet_TextAndMarks_KeepTheirContrast()
    {
        IReadOnlyList<IReadOnlyDictionary<string, string>> blocks = StylesheetColours.Blocks();
        Assert.Equal(4, blocks.Count);
        Assert.Equal(blocks[1], blocks[2]);
        foreach (IReadOnlyDictionary<string, string> block in blocks)
        {
            foreach (string ground in new[] { "ground", "panel", "sunk", "beyond" })
            {
                Assert.All(new[] { "ink", "ink2", "ink3", "caution" }, t => Over(LeastForText, t));
                Assert.All(new[] { "eeg", "meg", "both", "edge" }, t => Over(LeastForMarks, t));

                void Over(double least, string token)
                {
                    double contrast = StylesheetColours.Contrast(block[token], block[ground]);
                    Assert.True(contrast >= least, $"{token} on {ground}: {contrast:0.00}");
                }
            }
        }
    }

    // The published pairs: black on white is 21:1 by definition; #767676 on white is 4.54:1 (WCAG's own example, from memory).
    [Fact]
    public void Contrast_OfKnownPairs_IsThePublishedOne()
    {
        RelativeAssert.Equal(21, StylesheetColours.Contrast("#000000", "#FFFFFF"), 1e-12);
        RelativeAssert.Equal(4.54, StylesheetColours.Contrast("#767676", "#FFFFFF"), 2e-3);
    }

    [Fact]
    public void Stylesheet_NoTextIsInAModalityColour() =>
        Assert.DoesNotMatch(new Regex("(^|[\\s;{])color:\\s*var\\(--(eeg|meg|both)\\)"), HtmlReport.Stylesheet);
}
