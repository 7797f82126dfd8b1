using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

using static System.FormattableString;

namespace DeepSourceCheck.Core.Noise.Recordings;

/// <summary>
/// From a baseline to the noise of one trial in a band: band-pass, electrodes against their average, segments of a trial's length, those above the limit left out, shrunk covariance.
/// </summary>
/// <remarks>
/// Every electrode is referred to the average of all of them, so that the recording's own reference does not matter: what follows forms differences of electrodes alone.
/// nu = 2 B T is the number of independent samples of noise that is white over its band; noise that is not has fewer.
/// </remarks>
public sealed class BaselineNoise
{
    /// <summary>Fewest segments that are kept: two halves of at least two.</summary>
    public const int FewestSegments = 4;

    /// <summary>Fewest independent samples, a number below which no variance is known to a third.</summary>
    public const int FewestSamples = 20;

    private const string Key = "noise.eeg_recording";

    /// <summary>File as the study names it.</summary>
    public required string File { get; init; }

    /// <summary>The recording: one row an electrode with a signal.</summary>
    public required Recording Recording { get; init; }

    /// <summary>Row of the recording for each electrode, an index; -1 for the recording's reference, whose potential is zero.</summary>
    public required IReadOnlyList<int> RowOf { get; init; }

    /// <summary>Largest size of an electrode against the average, after the band-pass, in a segment that is kept [V].</summary>
    public required double Limit { get; init; }

    /// <summary>Band about the bin of a steady-state response from which its noise is read: a tenth of the frequency to either side, as the bins beside it are in tests of such responses (common practice, no source).</summary>
    /// <param name="steady">The response.</param>
    public static Band Around(SteadyState steady)
    {
        double half = Math.Max(0.1 * steady.Frequency, steady.Bin.Width / 2);
        return new(Math.Max(0, steady.Frequency - half), steady.Frequency + half);
    }

    /// <summary>Computes the noise of a band.</summary>
    /// <param name="band">Band [Hz], its upper edge at most 0.4 of the sampling rate.</param>
    /// <param name="segment">Length of a segment [s].</param>
    /// <param name="readFrom">Wider band [Hz] from which that of a narrow one is read by its share of the width; null for the band itself.</param>
    /// <exception cref="InputException">The recording is too short for the band, or nearly all of it exceeds the limit.</exception>
    public RecordedNoise InBand(Band band, double segment, Band? readFrom = null)
    {
        Band response = band;
        band = readFrom ?? band;
        double rate = Recording.SamplingRate;
        var filter = new BandPass(band, rate);
        int length = Math.Max(1, (int)Math.Round(segment * rate));
        var kept = new List<(double[][] Values, int Start)>();
        int segments = 0, p = RowOf.Count;
        var peaks = new List<double>();
        foreach (RecordedStretch stretch in Recording.Stretches)
        {
            double[][] values = AgainstAverage(filter.Apply(stretch.Values));
            for (int start = 0; start + length <= values[0].Length; start += length, segments++)
            {
                double peak = values.Max(row => Peak(row.AsSpan(start, length)));
                peaks.Add(peak);
                if (peak <= Limit)
                {
                    kept.Add((values, start));
                }
            }
        }

        double used = kept.Count * length / rate, independent = 2 * band.Width * used;
        Require(kept.Count, segments, independent, peaks, band, filter.Margin / rate, length / rate);
        SampleMoments first = Moments(kept.Take(kept.Count / 2)), second = Moments(kept.Skip(kept.Count / 2)), all = new(p);
        all.Add(first);
        all.Add(second);
        ShrunkCovariance covariance = ShrunkCovariance.Of(all, independent);
        return new RecordedNoise
        {
            File = File,
            Band = response,
            BandRead = band,
            Covariance = [.. covariance.Values.Select(c => c * (response.Width / band.Width))],
            IndependentSamples = independent,
            Shrinkage = covariance.Weight,
            HeldOutShare = HeldOutShare.Of(covariance, first, second, independent),
            SecondsUsed = used,
            SecondsRead = Recording.Seconds,
            SegmentSeconds = length / rate,
            Segments = segments,
            Rejected = segments - kept.Count,
            MedianRms = Math.Sqrt(response.Width / band.Width) * Math.Sqrt(Enumerable.Range(0, p).Select(k => covariance.Values[k * p + k]).Order().ElementAt(p / 2)),
        };

        SampleMoments Moments(IEnumerable<(double[][] Values, int Start)> of)
        {
            var moments = new SampleMoments(p);
            var sample = new double[p];
            foreach ((double[][] values, int start) in of)
            {
                for (int n = start; n < start + length; n++)
                {
                    for (int k = 0; k < p; k++)
                    {
                        sample[k] = values[k][n];
                    }

                    moments.Add(sample);
                }
            }

            return moments;
        }
    }

    private void Require(int kept, int segments, double independent, List<double> peaks, Band band, double margin, double segment)
    {
        string range = Invariant($"{band.Low:0.###} to {band.High:0.###} Hz");
        if (segments < FewestSegments)
        {
            throw new InputException(null, Key, Invariant(
                $"holds {segments} whole segments of {segment:0.######} s in {range}: the filter takes {margin:0.###} s at either end of each of its {Recording.Stretches.Count} stretches; at least {FewestSegments} are needed, so record longer or state a shorter segment_ms"));
        }

        if (kept < FewestSegments)
        {
            throw new InputException(null, Key + ".limit_uV", Invariant(
                $"is {Si.ToMicrovolts(Limit):0.###} uV and leaves {kept} of {segments} segments in {range}, whose median peak is {Si.ToMicrovolts(peaks.Order().ElementAt(peaks.Count / 2)):0.###} uV; check the unit of the recording, choose a quieter part, or state a higher limit"));
        }

        if (independent < FewestSamples)
        {
            throw new InputException(null, Key, Invariant(
                $"leaves {independent:0.#} independent samples in {range} (twice the bandwidth times the time that is used); at least {FewestSamples} are needed, so record longer"));
        }
    }

    // A new array only for the reference, whose row of zeros the recording does not have.
    private double[][] AgainstAverage(double[][] recorded)
    {
        int samples = recorded[0].Length;
        double[][] values = [.. RowOf.Select(row => row < 0 ? new double[samples] : recorded[row])];
        for (int n = 0; n < samples; n++)
        {
            double sum = 0;
            foreach (double[] row in values)
            {
                sum += row[n];
            }

            double mean = sum / values.Length;
            foreach (double[] row in values)
            {
                row[n] -= mean;
            }
        }

        return values;
    }

    private static double Peak(ReadOnlySpan<double> values)
    {
        double peak = 0;
        foreach (double value in values)
        {
            peak = Math.Max(peak, Math.Abs(value));
        }

        return peak;
    }
}
