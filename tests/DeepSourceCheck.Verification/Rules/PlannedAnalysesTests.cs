using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Studies;

using MathNet.Numerics.Distributions;

namespace DeepSourceCheck.Verification.Rules;

/// <summary>Planned analyses carried out on drawn averages: error rate, power, expected trials. And the t test over people on drawn people. Seeded.</summary>
public class PlannedAnalysesTests
{
    private const int Draws = 40_000;

    /// <summary>Standard errors: one in 15,000 beyond four.</summary>
    private const double Errors = 4;

    [Theory]
    [InlineData(Spending.ObrienFlemingType, 2, 0.05)]
    [InlineData(Spending.ObrienFlemingType, 5, 0.05)]
    [InlineData(Spending.PocockType, 3, 0.05)]
    [InlineData(Spending.PocockType, 5, 0.01)]
    public void StopsAndExpectedTrials_AreThoseOfDrawnAverages(Spending spending, int analyses, double alpha)
    {
        var plan = new RepeatedAnalyses(alpha, new(analyses, spending));
        double drift = plan.Drift(0.9);
        foreach (double mean in new[] { 0, drift })
        {
            double[] stops = plan.Stops(mean);
            int[] counted = new int[analyses];
            double steps = 0, squares = 0;
            var random = new Random(17 + analyses);
            for (int draw = 0; draw < Draws; draw++)
            {
                double sum = 0;
                int k = 0, last;
                bool stopped;
                do
                {
                    sum += Normal.Sample(random, mean / Math.Sqrt(analyses), 1);
                    last = ++k;
                    stopped = sum / Math.Sqrt(k) > plan.Bounds[k - 1];
                }
                while (!stopped && k < analyses);
                counted[last - 1] += stopped ? 1 : 0;
                steps += last;
                squares += last * last;
            }

            for (int k = 0; k < analyses; k++)
            {
                double error = Math.Sqrt(Math.Max(stops[k] * (1 - stops[k]), 1e-4) / Draws);
                Assert.True(Math.Abs((double)counted[k] / Draws - stops[k]) <= Errors * error, $"analysis {k + 1} at mean {mean}: {counted[k]} of {Draws}, {stops[k]} expected");
            }

            // Steps made on average: one, and one more for each analysis that was gone beyond.
            double expected = 1 + Enumerable.Range(1, analyses - 1).Sum(k => 1 - stops.Take(k).Sum()), found = steps / Draws;
            double spread = Math.Sqrt(Math.Max(squares / Draws - found * found, 1e-4) / Draws);
            Assert.True(Math.Abs(found - expected) <= Errors * spread, $"mean {mean}: {found} analyses made, {expected} expected");
        }
    }

    [Theory]
    [InlineData(18, 100, 0.8)]                                  // the worked grid: 18 people of 100 trials
    [InlineData(14, 200, 0.8)]
    public void PeopleOfTheWorkedGrid_ReachThePowerInDrawnStudies(int people, int trials, double power)
    {
        const int Studies = 20_000;
        double deviation = Math.Sqrt(1 + 100.0 / trials), critical = StudentT.InvCDF(0, 1, people - 1, 0.975);
        double predicted = new PeopleTest(0.05, power, twoGroups: false).PowerOf(1 / deviation, people);
        var random = new Random(5);
        int found = 0;
        var values = new double[people];
        for (int study = 0; study < Studies; study++)
        {
            Normal.Samples(random, values, 1, deviation);
            double mean = values.Average(), sd = Math.Sqrt(values.Sum(v => (v - mean) * (v - mean)) / (people - 1));
            found += Math.Abs(mean) * Math.Sqrt(people) / sd > critical ? 1 : 0;
        }

        Assert.True(predicted >= power);
        Assert.True(Math.Abs((double)found / Studies - predicted) <= Errors * Math.Sqrt(predicted * (1 - predicted) / Studies), $"{found} of {Studies}, {predicted} expected");
    }
}
