using DeepSourceCheck.Core.Planning;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Studies;

/// <summary>`rate_curve` of a response: its amplitude at several stimulus rates.</summary>
internal static class RateCurveBinder
{
    private const string Name = "rate_curve";

    /// <summary>The points in their order; empty where none are stated, or where they are wrong and reported.</summary>
    /// <param name="entry">The response.</param>
    /// <param name="steady">True where it says kind: steady-state.</param>
    public static IReadOnlyList<RatePoint> Bind(Section entry, bool steady)
    {
        if (!entry.States(Name))
        {
            return [];
        }

        if (steady)
        {
            entry.Problem(Name, "is of a transient response; the trials of a steady-state one follow each other as long as they are: remove it");
            entry.Skip(Name);
            return [];
        }

        var points = new List<RatePoint>();
        IReadOnlyList<Section> entries = entry.Entries(Name);
        foreach (Section point in entries)
        {
            if (point.Number("rate_per_s") is { } rate && point.Number("amplitude") is { } amplitude)
            {
                if (points.Count > 0 && rate <= points[^1].Rate)
                {
                    point.Problem("rate_per_s", $"{KeyShape.Text(rate)} is not above {KeyShape.Text(points[^1].Rate)} before it; write the points with rates rising");
                    return [];
                }

                points.Add(new(rate, amplitude));
            }
        }

        if (points.Count < entries.Count)
        {
            return [];
        }

        if (points.Count == 1)
        {
            entry.Problem(Name, "holds one point, which is no curve; write at least two");
            return [];
        }

        return points;
    }

    /// <summary>Whether the protocol's rate lies within every curve, at an amplitude other than zero.</summary>
    /// <param name="responses">Responses.</param>
    /// <param name="root">The study.</param>
    /// <param name="protocol">Protocol, or null.</param>
    /// <param name="reading">Takes problems.</param>
    public static void Check(IReadOnlyList<Response> responses, Section root, Protocol? protocol, Reading reading)
    {
        foreach (Response response in responses.Where(r => r.RateCurve.Count > 0))
        {
            string key = $"{response.Key}.{Name}";
            TextPlace place = reading.Places.GetValueOrDefault(key);
            IReadOnlyList<RatePoint> curve = response.RateCurve;
            if (protocol is null)
            {
                if (!root.States("protocol"))
                {
                    reading.Problem(place.Line, place.Column, key, "has no effect without protocol.rate_per_s, the rate that is held against it; state it, or remove the curve");
                }
            }
            else if (protocol.Rate < curve[0].Rate || protocol.Rate > curve[^1].Rate)
            {
                reading.Problem(place.Line, place.Column, key,
                    $"runs from {KeyShape.Text(curve[0].Rate)} to {KeyShape.Text(curve[^1].Rate)} a second and does not hold protocol.rate_per_s {KeyShape.Text(protocol.Rate)}, at which the moment is stated; extend it, or move the rate inside");
            }
            else if (RateOptimum.Amplitude(curve, protocol.Rate) <= 0)
            {
                reading.Problem(place.Line, place.Column, key, $"is zero at protocol.rate_per_s {KeyShape.Text(protocol.Rate)}, at which the moment is stated; correct it, or choose another rate");
            }
        }
    }
}
