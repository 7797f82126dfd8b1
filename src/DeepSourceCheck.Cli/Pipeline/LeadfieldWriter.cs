using System.Globalization;
using System.Text;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Files.Npy;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>`leadfield`: the arrays as the contract has them, EEG with the study's reference, dropped points as NaN.</summary>
internal static class LeadfieldWriter
{
    /// <summary>Writes eeg.npy, meg.npy, points.tsv and rows.tsv.</summary>
    /// <param name="prepared">The study.</param>
    /// <param name="folder">A folder that exists.</param>
    /// <param name="settings">Progress and cancellation.</param>
    public static void Write(PreparedStudy prepared, string folder, RunSettings settings)
    {
        ILeadfieldSource source = prepared.Setup.Source;
        ChannelOperator? reference = prepared.Setup.Reference;
        bool meg = prepared.Setup.MegReported;
        int points = prepared.Setup.Regions.Sum(r => r.Positions.Length + r.Dropped.Count);
        var eeg = new double[reference is null ? 0 : (long)reference.Outputs * points * 3];
        var field = new double[meg ? (long)source.MegRows * points * 3 : 0];
        Array.Fill(eeg, double.NaN);
        Array.Fill(field, double.NaN);
        long done = 0;
        int first = 0;
        foreach (FilledRegion region in prepared.Setup.Regions)
        {
            int start = first;
            int blocks = (region.Positions.Length + LeadfieldBlock.Lanes - 1) / LeadfieldBlock.Lanes;
            Parallel.For(0, blocks, new ParallelOptions { CancellationToken = settings.Cancellation },
                () => (Block: new LeadfieldBlock(source.EegRows, source.MegRows), Referenced: new double[(reference?.Outputs ?? 0) * 3 * LeadfieldBlock.Lanes]),
                (b, _, worker) =>
                {
                    int from = b * LeadfieldBlock.Lanes, n = Math.Min(LeadfieldBlock.Lanes, region.Positions.Length - from);
                    worker.Block.Load(region.Positions.AsSpan(from, n), region.SourceIndices.Length == 0 ? default : region.SourceIndices.AsSpan(from, n));
                    source.Fill(worker.Block);
                    for (int lane = 0; lane < n; lane++)
                    {
                        int point = start + region.Rows[from + lane];
                        if (reference is not null)
                        {
                            if (lane == 0)
                            {
                                reference.Apply(worker.Block.Eeg, worker.Referenced);
                            }

                            Scatter(worker.Referenced, reference.Outputs, lane, eeg, point, points);
                        }

                        if (meg)
                        {
                            Scatter(worker.Block.Meg, source.MegRows, lane, field, point, points);
                        }
                    }

                    long now = Interlocked.Add(ref done, n);
                    settings.Progress?.Invoke("leadfield", (double)now / Math.Max(1, prepared.Dipoles));
                    return worker;
                }, _ => { });
            first += region.Positions.Length + region.Dropped.Count;
        }

        settings.Cancellation.ThrowIfCancellationRequested();
        if (reference is not null)
        {
            NpyWriter.Write(Path.Combine(folder, "eeg.npy"), [reference.Outputs, points, 3], eeg);
        }

        if (meg)
        {
            NpyWriter.Write(Path.Combine(folder, "meg.npy"), [source.MegRows, points, 3], field);
        }

        File.WriteAllText(Path.Combine(folder, "points.tsv"), Points(prepared.Setup.Regions));
        File.WriteAllText(Path.Combine(folder, "rows.tsv"), Rows(prepared));
    }

    private static void Scatter(double[] lanes, int rows, int lane, double[] array, int point, int points)
    {
        for (int row = 0; row < rows; row++)
        {
            long at = ((long)row * points + point) * 3;
            for (int axis = 0; axis < 3; axis++)
            {
                array[at + axis] = lanes[LeadfieldBlock.At(row, axis) + lane];
            }
        }
    }

    private static string Points(IReadOnlyList<FilledRegion> regions)
    {
        var text = new StringBuilder("name\tx\ty\tz\tregion\tdropped\n");
        foreach (FilledRegion region in regions)
        {
            var rows = new SortedDictionary<int, (string Name, Vec3 Position, string Reason)>();
            for (int k = 0; k < region.Positions.Length; k++)
            {
                rows[region.Rows[k]] = (region.PointNames.Length > 0 ? region.PointNames[k] : "", region.Positions[k], "");
            }

            foreach (DroppedPoint point in region.Dropped)
            {
                rows[point.Row] = (point.Name, point.Position, point.Reason);
            }

            foreach ((int row, (string name, Vec3 p, string reason)) in rows)
            {
                string shown = name.Length > 0 ? name : string.Create(CultureInfo.InvariantCulture, $"{region.Name}-{row}");
                text.Append(CultureInfo.InvariantCulture, $"{shown}\t{Si.ToMm(p.X):R}\t{Si.ToMm(p.Y):R}\t{Si.ToMm(p.Z):R}\t{region.Name}\t{reason}\n");
            }
        }

        return text.ToString();
    }

    private static string Rows(PreparedStudy prepared)
    {
        var text = new StringBuilder("row\tmodality\tkind\tunit\tx\ty\tz\n");
        Scene scene = prepared.Setup.Scene;
        IReadOnlyList<string> names = prepared.Setup.Reference?.Names ?? [];
        for (int k = 0; k < names.Count; k++)
        {
            string place = k < scene.Electrodes.Count ? Place(scene.Electrodes[k].Position) : "n/a\tn/a\tn/a";
            text.Append(CultureInfo.InvariantCulture, $"{names[k]}\tEEG\telectrode\tV/(A m)\t{place}\n");
        }

        for (int k = 0; prepared.Setup.MegReported && k < prepared.Setup.MegNames.Count; k++)
        {
            CoilKind kind = prepared.Setup.MegKinds[k];
            string place = k < prepared.Setup.MegSites.Count ? Place(prepared.Setup.MegSites[k]) : "n/a\tn/a\tn/a";
            text.Append(CultureInfo.InvariantCulture, $"{prepared.Setup.MegNames[k]}\tMEG\t{Names.Of(kind)}\t{(kind == CoilKind.PlanarGradiometer ? "T/m/(A m)" : "T/(A m)")}\t{place}\n");
        }

        return text.ToString();
    }

    private static string Place(Vec3 p) => string.Create(CultureInfo.InvariantCulture, $"{Si.ToMm(p.X):R}\t{Si.ToMm(p.Y):R}\t{Si.ToMm(p.Z):R}");
}
