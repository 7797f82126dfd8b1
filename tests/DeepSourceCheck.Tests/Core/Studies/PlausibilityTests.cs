using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Tests.Core.Studies;

/// <summary>Usual range 2 to 100: warns beyond 3 times, stops beyond 10 times.</summary>
public class PlausibilityTests
{
    [Theory]
    [InlineData(2.0, Plausible.Yes)]
    [InlineData(100.0, Plausible.Yes)]
    [InlineData(300.0, Plausible.Yes)]
    [InlineData(301.0, Plausible.Warning)]
    [InlineData(1000.0, Plausible.Warning)]
    [InlineData(1001.0, Plausible.Problem)]
    [InlineData(0.667, Plausible.Yes)]
    [InlineData(0.66, Plausible.Warning)]
    [InlineData(0.2, Plausible.Warning)]
    [InlineData(0.199, Plausible.Problem)]
    [InlineData(0.0, Plausible.Problem)]
    [InlineData(-5.0, Plausible.Problem)]
    [InlineData(double.NaN, Plausible.Problem)]
    [InlineData(double.PositiveInfinity, Plausible.Problem)]
    public void Value_IsJudgedByThreeAndTenTimes(double value, Plausible expected) =>
        Assert.Equal(expected, Plausibility.Judge("noise.eeg_sensor_nV_per_rtHz", value, 2, 100, "nV/sqrt(Hz)", []).Is);

    [Fact]
    public void AcceptedKey_IsAWarningInsteadOfAProblem()
    {
        PlausibilityJudgement judgement = Plausibility.Judge("a.b", 5000, 2, 100, "fT", ["a.b"], "the peak amplitude");
        Assert.Equal(Plausible.Warning, judgement.Is);
        Assert.Equal("the peak amplitude 5000 fT is far from the usual 2 to 100 fT (more than 10 times outside); accepted by accept_implausible", judgement.Text);
    }

    [Fact]
    public void Problem_NamesTheKeyToAccept() =>
        Assert.Contains("add `a.b` to accept_implausible", Plausibility.Judge("a.b", 5000, 2, 100, "", ["a.c"]).Text, StringComparison.Ordinal);
}
