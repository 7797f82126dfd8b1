namespace DeepSourceCheck.Tests.References;

/// <summary>Variance of an average over trials, some of them rejected at random, from the covariance of the noise between any two of them: slow, and knows no comb.</summary>
internal static class PlainRepeatedAverage
{
    /// <summary>(s^2/N) over the variance of the average.</summary>
    public static double EffectiveShare(Func<double, double> density, double low, double high, double rate, int presented, double rejected, double jitter)
    {
        const int Steps = 60_000;
        double step = (high - low) / Steps, zero = 0, sum = 0;
        double[] lags = new double[presented];
        for (int k = 0; k < Steps; k++)
        {
            double f = low + (k + 0.5) * step, power = density(f) * step, w = Math.PI * f * jitter;
            double locked = power * (jitter == 0 ? 1 : Math.Pow(Math.Sin(w) / w, 2));
            zero += power;
            for (int j = 1; j < presented; j++)
            {
                lags[j] += locked * Math.Cos(2 * Math.PI * f * j / rate);
            }
        }

        for (int j = 1; j < presented; j++)
        {
            sum += 2 * (presented - j) * lags[j];
        }

        double kept = 1 - rejected, n = presented * kept;
        double variance = (n * zero + kept * kept * sum) / (n * n);
        return zero / n / variance;
    }
}
