using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Files.Studies;

/// <summary>What a study may leave unknown.</summary>
public class UnknownsTests
{
    private const double Rounding = 1e-15;

    private const string Title = "title: small";

    private static Study Read(string unknowns) => StudyText.Read(StudyText.Small.With(Title, $"{Title}\nunknowns: {unknowns}")).Study;

    [Fact]
    public void Unknowns_AreReadInSiUnits()
    {
        UnknownsChoice unknowns = Read("{skull_conductivity_ratio: {low: 15, typical: 25, high: 80}, noise_factor: {low: 0.7, typical: 1, high: 1.5}, head_shift_mm: 5, centre_shift_mm: 4}").Unknowns!;
        Assert.Equal(new Spread(15, 25, 80), unknowns.SkullRatio);
        Assert.Equal(new Spread(0.7, 1, 1.5), unknowns.NoiseFactor);
        Assert.Equal((0.005, 0.004, 256), (unknowns.HeadShift, unknowns.CentreShift, unknowns.Samples));
    }

    [Fact]
    public void TypicalRatio_ReplacesTheHeadsOwn()
    {
        var head = Assert.IsType<SphereHeadChoice>(Read("{skull_conductivity_ratio: {low: 15, typical: 50, high: 80}}").Head);
        RelativeAssert.Equal(50, SkullRatio.Of(head.Sphere)!.Value, Rounding);
        RelativeAssert.Equal(0.33 / 50, head.Sphere.Layers[2].RadialConductivity, Rounding);
        Assert.Equal([0.33, 1.79, 0.43], head.Sphere.Layers.Where((_, k) => k != 2).Select(l => l.RadialConductivity));
    }

    [Fact]
    public void TypicalsThatMoveTheFigures_AreSaid()
    {
        string text = StudyText.Small.With(Title, $"{Title}\nunknowns: {{skull_conductivity_ratio: {{low: 15, typical: 50, high: 80}}, noise_factor: {{low: 1, typical: 1.2, high: 1.5}}}}");
        IReadOnlyList<string> warnings = StudyText.Read(text).Warnings;
        Assert.Contains(warnings, w => w.Contains("50 replaces the head's own ratio of 25", StringComparison.Ordinal));
        Assert.Contains(warnings, w => w.Contains("1.2 times it", StringComparison.Ordinal));
    }

    [Fact]
    public void SkullWithoutElectrodes_HasNoEffect()
    {
        string text = StudyText.Small.With("  eeg: {layout: ten-ten-64, reference: average}\n", "").With("  eeg_derivations: [Cz-mastoids, Cz-M1]\n", "").With("  eeg_sensor_nV_per_rtHz: 20\n", "")
            .With(Title, $"{Title}\nunknowns: {{skull_conductivity_ratio: {{low: 15, typical: 25, high: 80}}, head_shift_mm: 5}}");
        StudyReading reading = StudyText.Read(text);
        Assert.Contains(reading.Warnings, w => w.Contains("MEG does not depend on conductivity", StringComparison.Ordinal));
        Assert.Null(reading.Study.Unknowns!.SkullRatio);
    }

    [Fact]
    public void TypicalRatio_OfThePreset_LeavesTheHeadAsItIs() =>
        Assert.Equal(0.0132, Assert.IsType<SphereHeadChoice>(Read("{skull_conductivity_ratio: {low: 15, typical: 25, high: 80}}").Head).Sphere.Layers[2].RadialConductivity);

    [Theory]
    [InlineData("{samples: 64}", "unknowns", "nothing to vary")]
    [InlineData("{noise_factor: {low: 1.2, typical: 1, high: 1.5}}", "unknowns.noise_factor", "not ordered")]
    [InlineData("{noise_factor: {low: 0.5, high: 1.5}}", "unknowns.noise_factor.typical", "missing")]
    [InlineData("{noise_factor: 2}", "unknowns.noise_factor", "keys with values")]
    [InlineData("{head_shift_mm: 5, samples: 3}", "unknowns.samples", "out of range")]
    [InlineData("{centre_shift_mm: 60}", "unknowns.centre_shift_mm", "out of range")]
    [InlineData("{head_shift_mm: -5}", "unknowns.head_shift_mm", "out of range")]
    [InlineData("{gap_mm: 5}", "unknowns.gap_mm", "sensors.meg.gap_mm")]
    public void WrongUnknowns_NameKeyAndWhatIsAllowed(string unknowns, string key, string says)
    {
        InputProblem problem = StudyText.Problem(StudyText.Small.With(Title, $"{Title}\nunknowns: {unknowns}"));
        Assert.Equal(key, problem.Key);
        Assert.Contains(says, problem.Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("skull_conductivity_ratio: {low: 15, typical: 25, high: 80}", "unknowns.skull_conductivity_ratio")]
    [InlineData("centre_shift_mm: 5", "unknowns.centre_shift_mm")]
    [InlineData("head_shift_mm: 5", "unknowns.head_shift_mm")]
    public void ImportedHead_HasNothingOfItsHeadToVary(string unknown, string key)
    {
        InputProblem problem = StudyText.Problem(StudyText.Imported.With("title: imported", $"title: imported\nunknowns: {{{unknown}}}"));
        Assert.Equal(key, problem.Key);
        Assert.Contains("head.leadfields", problem.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void HeadWithoutSkull_HasNoRatio()
    {
        string text = StudyText.Tables.With("tissue: skull", "tissue: bone").With("title: tables", "title: tables\nunknowns: {skull_conductivity_ratio: {low: 15, typical: 25, high: 80}}");
        Assert.Contains("no layer of the head is called skull", StudyText.Problem(text).Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Spread_PutsLowTypicalAndHighAtTheirQuantiles()
    {
        var spread = new Spread(15, 25, 80);
        RelativeAssert.Equal(15, spread.At(-Spread.Z95), 1e-14);
        RelativeAssert.Equal(25, spread.At(0), 1e-14);
        RelativeAssert.Equal(80, spread.At(Spread.Z95), 1e-14);

        // Handbook value of the 95 % point of the standard normal distribution.
        RelativeAssert.Equal(1.6448536269514722, Spread.Z95, Rounding);
    }
}
