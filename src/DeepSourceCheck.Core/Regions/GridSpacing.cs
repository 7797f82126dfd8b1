using System.Globalization;

using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Regions;

/// <summary>Which spacing a region is filled with and how many dipoles that makes, before anything is allocated.</summary>
public static class GridSpacing
{
    /// <summary>Spacing where none is stated [m].</summary>
    public const double Default = 0.002;

    /// <summary>Dipoles that a region without a stated spacing shall hold.</summary>
    public const int LeastDipoles = 50;

    /// <summary>Most halvings of the default spacing: 2 mm to 0.031 mm.</summary>
    public const int MostHalvings = 6;

    /// <summary>Largest spacing [m]: wider than any head.</summary>
    public const double Largest = 1.0;

    /// <summary>Most dipoles of one region.</summary>
    public const long MostDipoles = 20_000_000;

    /// <summary>Expected number of dipoles: volume over spacing cubed, rounded; <see cref="long.MaxValue"/> where that overflows.</summary>
    /// <param name="volume">Volume of the shape [m^3].</param>
    /// <param name="spacing">Stated spacing [m], or null for the default with its refinement.</param>
    public static long PredictCount(double volume, double? spacing)
    {
        double h = spacing ?? Predict(volume);
        double count = Math.Round(volume / h / h / h);
        return count < 9.2e18 ? (long)count : long.MaxValue;
    }

    /// <summary>Refuses a spacing that is not positive, or that makes more dipoles than one region may hold.</summary>
    /// <exception cref="InputException">Names the region, the count and the smallest spacing that is allowed.</exception>
    public static void Check(string region, double volume, double? spacing, string? file = null, string? key = null)
    {
        if (spacing is { } stated && !(stated > 0 && stated <= Largest))
        {
            throw new InputException(file, key, $"region '{region}': spacing_mm must be a number above 0, at most {Si.ToMm(Largest):0}");
        }

        double expected = volume / Math.Pow(spacing ?? Predict(volume), 3);
        if (!(expected <= MostDipoles))
        {
            double smallest = Math.Ceiling(1000 * Si.ToMm(Math.Cbrt(volume / MostDipoles))) / 1000;
            throw new InputException(file, key, string.Create(
                CultureInfo.InvariantCulture,
                $"region '{region}' would hold {expected:0.0e+0} dipoles; at most {MostDipoles:0.0e+0} are allowed: "
                + $"state a spacing_mm of at least {smallest:0.###}"));
        }
    }

    /// <summary>The spacing as the decimal number of millimetres that the study meant: 1.5 rather than 1.4999999999999998.</summary>
    /// <param name="spacing">Spacing [m].</param>
    internal static decimal InMillimetres(double spacing) =>
        decimal.Parse(Si.ToMm(spacing).ToString("G15", CultureInfo.InvariantCulture), NumberStyles.Float, CultureInfo.InvariantCulture);

    private static double Predict(double volume)
    {
        double h = Default;
        for (int k = 0; k < MostHalvings && volume / (h * h * h) < LeastDipoles; k++)
        {
            h /= 2;
        }

        return h;
    }
}
