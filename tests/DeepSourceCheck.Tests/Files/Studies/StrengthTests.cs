using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Files.Studies;

/// <summary>How the strength of a response is stated.</summary>
public class StrengthTests
{
    // One rounding a conversion, three factors.
    private const double Rounding = 1e-15;

    private const string Stated = "moment_nAm: 3.5", RegionsLine = "regions: [pons, nucleus]", Together = "regions: [pons, nucleus]\n    counts: together";

    private static Response Read(string replacement) => Assert.Single(StudyText.Read(StudyText.Small.With(Stated, replacement)).Study.Responses);

    [Fact]
    public void Range_KeepsItsEndsAndStandsOnTheTypicalMoment()
    {
        Response response = Read("moment_nAm: {low: 2, typical: 5, high: 9}");
        RelativeAssert.Equal(5e-9, response.Moment, Rounding);
        RelativeAssert.Equal(2e-9, response.MomentRange!.Low, Rounding);
        RelativeAssert.Equal(9e-9, response.MomentRange.High, Rounding);
    }

    [Fact]
    public void Density_TimesAreaTimesOpenField_IsTheMoment()
    {
        // 0.5 nAm/mm2 over 300 mm2, 0.4 of it open: 60 nAm (the contract's example, by hand).
        Response response = Read("density: {nAm_per_mm2: 0.5, area_mm2: 300, open_field: 0.4}");
        RelativeAssert.Equal(60e-9, response.Moment, Rounding);
    }

    [Fact]
    public void Amplitude_IsReadInItsDerivationWhetherOrNotThatIsListed()
    {
        Study study = StudyText.Read(StudyText.Small.With(Stated, "amplitude: {peak_uV: 0.45, derivation: Fz-M2}")).Study;
        Assert.Equal(["Cz-mastoids", "Cz-M1", "Fz-M2"], study.Derivations);
        Assert.Equal("Fz-M2", study.Responses[0].Amplitude!.Derivation);
        RelativeAssert.Equal(0.45e-6, study.Responses[0].Amplitude!.Peak, Rounding);
    }

    [Theory]
    [InlineData("moment_nAm: {low: 5, typical: 3, high: 9}", "responses.wave V.moment_nAm", "not ordered")]
    [InlineData("moment_nAm: {low: 5, high: 9}", "responses.wave V.moment_nAm.typical", "missing")]
    [InlineData("moment_nAm: 3.5\n    amplitude: {peak_uV: 0.45, derivation: Cz-mastoids}", "responses.wave V.amplitude", "stands beside moment_nAm")]
    [InlineData("amplitude: {peak_uV: 0.45, derivation: Cz}", "responses.wave V.amplitude.derivation", "is no difference")]
    [InlineData("amplitude: {peak_uV: 4500, derivation: Cz-mastoids}", "responses.wave V.amplitude.peak_uV", "far from the usual")]
    [InlineData("density: {nAm_per_mm2: 50, area_mm2: 3, open_field: 0.4}", "responses.wave V.density.nAm_per_mm2", "far from the usual")]
    [InlineData("density: {nAm_per_mm2: 0.5, area_mm2: 300, open_field: 1.4}", "responses.wave V.density.open_field", "out of range")]
    [InlineData("moment_nAm: 3.5\n    shares: [1, -1]", "responses.wave V.shares", "counts: together")]
    public void WrongStrength_NamesKeyAndWhatIsAllowed(string replacement, string key, string says)
    {
        InputProblem problem = StudyText.Problem(StudyText.Small.With(Stated, replacement));
        Assert.Equal(key, problem.Key);
        Assert.Contains(says, problem.Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("shares: [1, -1, 2]", "shares", "3 entries for 2 regions")]
    [InlineData("shares: [0, 0]", "shares", "all zero")]
    [InlineData("lags_ms: [0, 1]", "lags_ms", "component_Hz")]
    [InlineData("lags_ms: [0, x]", "lags_ms", "not allowed")]
    [InlineData("lags_ms: [0, 1]\n    component_Hz: 500\n    cycles: 2", "lags_ms", "not supported yet with cycles")]
    public void WrongShares_NameKeyAndWhatIsAllowed(string line, string name, string says)
    {
        InputProblem problem = StudyText.Problem(StudyText.Small.With(RegionsLine, Together + "\n    " + line));
        Assert.Equal("responses.wave V." + name, problem.Key);
        Assert.Contains(says, problem.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Shares_AreScaledToAWhole()
    {
        Response response = StudyText.Read(StudyText.Small.With(RegionsLine, Together + "\n    shares: [3, -1]\n    lags_ms: [0, 0.5]\n    component_Hz: 500")).Study.Responses[0];
        Assert.Equal([0.75, -0.25], response.Shares);
        Assert.Equal([0, 0.0005], response.Lags);
    }

    [Fact]
    public void FoundMoment_IsAcceptedUnderTheKeyThatItStandsInFor() =>
        Assert.Equal(["responses.wave V.moment_nAm"], StudyText.Read(StudyText.Small.With(Stated, "amplitude: {peak_uV: 0.45, derivation: Cz-mastoids}")
            + "\naccept_implausible: [responses.wave V.moment_nAm]").Study.AcceptImplausible);
}
