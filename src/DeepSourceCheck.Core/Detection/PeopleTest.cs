using DeepSourceCheck.Core.Numerics;

using MathNet.Numerics.Distributions;

namespace DeepSourceCheck.Core.Detection;

/// <summary>The two-sided t test over people: of the mean of one group against 0, or of the means of two groups of equal size.</summary>
/// <remarks>
/// t has n - 1 (two groups: 2 n - 2) degrees of freedom and noncentrality d sqrt(n) (d sqrt(n/2)). Both tails count: t^2 is noncentral F with 1 and as many degrees of freedom.
/// Source: Johnson, Kotz and Balakrishnan 1995, Continuous Univariate Distributions II, ch. 31; Cohen 1988 tabulates the counts (both from memory).
/// </remarks>
public sealed class PeopleTest
{
    private const double FewestPeople = 2;

    /// <summary>Beyond this ratio of noncentrality to critical value the spread of the sample would have to be a hundred times the true one for t to fall short: power 1 in double precision.</summary>
    private const double Certain = 1e4;

    private readonly double _alpha, _power, _samples, _known;

    /// <param name="alpha">False-alarm rate over both tails, 0 to 1.</param>
    /// <param name="power">Probability of finding the effect, 0 to 1.</param>
    /// <param name="twoGroups">True: two groups are compared, and people are counted in each.</param>
    public PeopleTest(double alpha, double power, bool twoGroups)
    {
        _alpha = alpha;
        _power = power;
        _samples = twoGroups ? 2 : 1;
        double sum = Normal.InvCDF(0, 1, 1 - alpha / 2) + Normal.InvCDF(0, 1, power);
        _known = _samples * sum * sum;
    }

    /// <summary>Probability of finding an effect.</summary>
    /// <param name="effectSize">Mean, or difference of means, over the standard deviation of one person, without unit.</param>
    /// <param name="people">People in each group.</param>
    public double PowerOf(double effectSize, double people)
    {
        if (people < FewestPeople)
        {
            return 0;
        }

        double nu = _samples * (people - 1), critical = NoncentralF.Critical(_alpha, 1, nu), lambda = effectSize * effectSize * people / _samples;
        return lambda > Certain * Math.Max(critical, 1) ? 1 : NoncentralF.Survival(critical, 1, nu, lambda);
    }

    /// <summary>Fewest people in each group with the power asked for, at least 2; null beyond what can be counted.</summary>
    /// <param name="effectSize">Mean, or difference of means, over the standard deviation of one person, without unit; at least 0.</param>
    public long? People(double effectSize) =>
        TrialCount.Ceiling(CountSearch.Smallest(n => PowerOf(effectSize, n), _power, FewestPeople, _known / (effectSize * effectSize)));
}
