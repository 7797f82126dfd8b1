using CsCheck;

using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Tests.References;
using DeepSourceCheck.Tests.Support;

using MathNet.Numerics;

namespace DeepSourceCheck.Tests.Core.Detection;

/// <summary>People that a t test needs: textbook counts to the person, the plain twin, monotony.</summary>
public class PeopleTestTests
{
    /// <summary>Relative: the twin's terms come from logarithms of the gamma function.</summary>
    private const double TwinTolerance = 1e-9;

    private static PeopleTest One(double alpha = 0.05, double power = 0.8) => new(alpha, power, twoGroups: false);

    [Theory]                                                    // Cohen 1988, tables of the t test at two-sided .05 and power .80 (from memory), one sample
    [InlineData(0.8, 15)]
    [InlineData(0.5, 34)]
    [InlineData(0.3, 90)]
    [InlineData(0.2, 199)]
    public void OneGroup_IsTheTextbooks(double effectSize, long people) => Assert.Equal(people, One().People(effectSize));

    [Theory]                                                    // the same, two groups, in each
    [InlineData(0.8, 26)]
    [InlineData(0.5, 64)]
    public void TwoGroups_AreTheTextbooks(double effectSize, long people) => Assert.Equal(people, new PeopleTest(0.05, 0.8, twoGroups: true).People(effectSize));

    [Theory]                                                    // mean 1, spread between people 1, noise of one trial 10: exact noncentral t, recomputed outside the project
    [InlineData(10, 89)]
    [InlineData(25, 42)]
    [InlineData(50, 26)]
    [InlineData(100, 18)]
    [InlineData(200, 14)]
    [InlineData(400, 12)]
    [InlineData(1000, 11)]
    [InlineData(double.PositiveInfinity, 10)]
    public void PeopleAgainstTrials_AreTheWorkedGrid(double trials, long people) => Assert.Equal(people, One().People(1 / Math.Sqrt(1 + 100 / trials)));

    [Theory]
    [InlineData(1, 0.05, 12, 0.7)]
    [InlineData(1, 0.001, 40, 0.3)]
    [InlineData(2, 0.05, 20, 0.02)]                             // both tails count: chance alone passes nearly as often
    [InlineData(2, 0.1, 8, 1.2)]
    public void Power_IsThatOfTheTermByTermTwin(int groups, double alpha, double people, double effectSize)
    {
        double nu = groups * (people - 1), t = ExcelFunctions.TInv(alpha, (int)nu);
        double twin = PlainNoncentral.FSurvival(t * t, 1, nu, effectSize * effectSize * people / groups);
        RelativeAssert.Equal(twin, new PeopleTest(alpha, 0.8, groups == 2).PowerOf(effectSize, people), TwinTolerance);
    }

    [Fact]
    public void Count_IsTheFirstThatHasThePower() => Gen.Select(Gen.Double[0.03, 3], Gen.Double[0.3, 0.99], Gen.Double[0.001, 0.2], Gen.Bool).Sample((d, power, alpha, two) =>
    {
        var test = new PeopleTest(alpha, power, two);
        long people = test.People(d)!.Value;
        Assert.True(test.PowerOf(d, people) >= power);
        Assert.True(people == 2 || test.PowerOf(d, people - 1) < power);
        Assert.True(test.People(1.1 * d) <= people);
    }, seed: "0N0XIzNsQ0O2", iter: 200, threads: 1);

    [Theory]                                                    // people who are alike and give trials without limit; and the step to where the power is 1 in double precision
    [InlineData(double.PositiveInfinity)]
    [InlineData(1e9)]
    public void EffectWithoutSpread_NeedsTheFewestPeople(double effectSize)
    {
        Assert.Equal(2, One().People(effectSize));
        Assert.Equal(1, One().PowerOf(effectSize, 2));
        double step = Math.Sqrt(1e4 * Math.Pow(ExcelFunctions.TInv(0.05, 1), 2) / 2);
        RelativeAssert.Equal(1, One().PowerOf(0.999 * step, 2), 1e-12);
    }

    [Fact]
    public void NoEffect_IsBeyondCounting() => Assert.Null(One().People(0));
}
