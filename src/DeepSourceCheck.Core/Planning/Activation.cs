using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Planning;

// Activation.cs - regions that act together, with signs and lags.
//   Region i carries the share w_i of the moment (signed, sum |w_i| = 1; equal where not stated) and follows the first by the lag t_i: at the response's frequency f its
//   moment runs as w_i cos(phase - theta_i), theta_i = 2 pi f t_i.
//   The reading is taken at the phase at which the net moment sum w_i cos(phase - theta_i) is largest, the argument of Z = sum w_i exp(i theta_i); where the moments cancel to
//   nothing (Z = 0) at the peak of the first. There region i weighs w_i cos(phase - theta_i).
//   Phasor addition: textbook of alternating currents, no source needed.

/// <summary>Weights of regions that act together.</summary>
public static class Activation
{
    private const double NoNetMoment = 1e-9;

    /// <summary>Signed weight of each region at the time of reading, without unit; without lags the shares themselves.</summary>
    /// <param name="response">Regions, shares, lags, frequency.</param>
    public static IReadOnlyList<double> Weights(Response response)
    {
        double[] shares = Shares(response);
        if (response.ComponentFrequency is not { } f || response.Lags.All(l => l == 0))
        {
            return shares;
        }

        double[] theta = [.. response.Lags.Select(l => 2 * Math.PI * f * l)];
        double re = shares.Zip(theta, (w, t) => w * Math.Cos(t)).Sum(), im = shares.Zip(theta, (w, t) => w * Math.Sin(t)).Sum();
        double phase = Math.Sqrt(re * re + im * im) > NoNetMoment ? Math.Atan2(im, re) : theta[0];
        return [.. shares.Zip(theta, (w, t) => w * Math.Cos(phase - t))];
    }

    /// <summary>Signed shares of the moment, without unit; their absolute values sum to 1.</summary>
    /// <param name="response">Regions and shares.</param>
    public static double[] Shares(Response response) => response.Shares.Count > 0
        ? [.. response.Shares]
        : [.. Enumerable.Repeat(1.0 / response.Regions.Count, response.Regions.Count)];
}
