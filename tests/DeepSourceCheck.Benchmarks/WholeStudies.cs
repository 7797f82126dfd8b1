using System.Globalization;
using System.Text;

using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Benchmarks;

/// <summary>
/// The studies of the whole-process runs: dipoles evenly within 0.6 of the inner radius as a file of points, in no order, 64 electrodes, 291 axial gradiometers of two points.
/// </summary>
internal static class WholeStudies
{
    /// <summary>Dipoles.</summary>
    public const int Dipoles = 300_000;

    private const int Channels = 291;

    /// <summary>Writes points.tsv, diagonal.yaml, dense.yaml and the covariance of the latter.</summary>
    public static void Write(string folder)
    {
        Directory.CreateDirectory(folder);
        WritePoints(Path.Combine(folder, "points.tsv"));
        WriteCovariance(Path.Combine(folder, "meg-covariance.npy"));
        File.WriteAllText(Path.Combine(folder, "diagonal.yaml"), Study("meg_sensor_fT_rms: 180"));
        File.WriteAllText(Path.Combine(folder, "dense.yaml"), Study("meg_covariance: meg-covariance.npy"));
    }

    private static string Study(string megNoise) => $$"""
        title: Speed
        head:
          spheres: {preset: adult-4}
        sensors:
          eeg: {layout: ten-ten-64, reference: average}
          meg: {coil: axial-gradiometer, sites: {{Channels}}, baseline_mm: 60, gap_mm: 30}
        noise:
          eeg_sensor_uV_rms: 2.0
          {{megNoise}}
        regions:
          - {name: cloud, points: points.tsv}
        responses:
          - name: speed
            regions: [cloud]
            moment_nAm: 10
            measured: baseline-to-peak
            band_Hz: [1, 100]
            direction: tangential
        target: {amplitude_ratio: 3}
        protocol: {rate_per_s: 1, rejected_fraction: 0.1, session_min: 40}

        """;

    private static void WritePoints(string path)
    {
        var random = new Random(7);
        var text = new StringBuilder("name\tx\ty\tz\n");
        for (int k = 0; k < Dipoles; k++)
        {
            Vec3 p;
            do
            {
                p = new(2 * random.NextDouble() - 1, 2 * random.NextDouble() - 1, 2 * random.NextDouble() - 1);
            }
            while (p.Norm > 1);
            p = 0.6 * 78 * p;
            text.Append(CultureInfo.InvariantCulture, $"p{k}\t{p.X:0.0000}\t{p.Y - 18:0.0000}\t{p.Z + 5:0.0000}\n");
        }

        File.WriteAllText(path, text.ToString());
    }

    // 180 fT of noise in each channel, half of it common to many: s^2 (I/2 + A A'/(2k)), A of k random columns.
    private static void WriteCovariance(string path)
    {
        const int columns = 2 * Channels;
        const double variance = 180e-15 * 180e-15;
        var random = new Random(8);
        double[] a = [.. Enumerable.Range(0, Channels * columns).Select(_ => Math.Sqrt(12) * (random.NextDouble() - 0.5))];
        string header = $"{{'descr': '<f8', 'fortran_order': False, 'shape': ({Channels}, {Channels}), }}";
        header = header.PadRight(118 - 1) + "\n";                // 10 bytes before it: 128 in all
        using var writer = new BinaryWriter(File.Create(path));
        writer.Write([0x93, .. "NUMPY"u8, 1, 0]);
        writer.Write((ushort)header.Length);
        writer.Write(Encoding.ASCII.GetBytes(header));
        for (int i = 0; i < Channels; i++)
        {
            for (int j = 0; j < Channels; j++)
            {
                double sum = 0;
                for (int k = 0; k < columns; k++)
                {
                    sum += a[i * columns + k] * a[j * columns + k];
                }

                writer.Write(0.5 * variance * ((i == j ? 1 : 0) + sum / columns));
            }
        }
    }
}
