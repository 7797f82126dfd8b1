using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Nifti;

using static System.FormattableString;

namespace DeepSourceCheck.Files.Heads;

/// <summary>Turns a NIfTI label volume into tissues: every label must be listed, so that nothing conducts by accident.</summary>
public static class TissueVolumeReader
{
    private const string TissuesKey = "head.voxels.tissues";
    private const int MostListed = 20;

    /// <summary>Bytes that reading takes, from the header alone: the values of the file, and tissues before and after cutting.</summary>
    /// <param name="header">Header of the label volume.</param>
    public static long Bytes(NiftiHeader header) => header.DataBytes + 2L * header.Grid.Count;

    /// <summary>Reads a label volume.</summary>
    /// <param name="path">The file.</param>
    /// <param name="displayName">As the user named it.</param>
    /// <param name="tissues">Tissues with their labels; label 0 is air, listed or not.</param>
    /// <returns>The whole volume as tissues, air first, and what the user must know.</returns>
    /// <exception cref="InputException">The file cannot be read or placed; a value is not finite, no whole number or negative; a label is not listed; every voxel is air.</exception>
    public static (TissueVolume Volume, IReadOnlyList<string> Warnings) Read(string path, string displayName, IReadOnlyList<Tissue> tissues)
    {
        NiftiVolume file = NiftiReader.Read(path, displayName);
        if (!file.Header.IsPlaced)
        {
            throw new InputException(displayName, "sform_code",
                "the file states no orientation (sform_code and qform_code are 0), so nobody knows which side is left or where regions and sensors lie in the head; give the file an sform or a qform");
        }

        CheckValues(file.Volume);
        Tissue[] known = [new(0, tissues.FirstOrDefault(t => t.Kind == TissueKind.Air)?.Name ?? "air", TissueKind.Air, 0), .. tissues.Where(t => t.Kind != TissueKind.Air)];
        Dictionary<long, byte> index = new() { [0] = 0 };
        foreach (Tissue air in tissues.Where(t => t.Kind == TissueKind.Air))
        {
            index[air.Label] = 0;
        }

        for (int k = 1; k < known.Length; k++)
        {
            index[known[k].Label] = (byte)k;
        }

        (byte[] cells, Dictionary<long, (int Count, int First)> found) = Cells(file.Volume, index);
        CheckLabels(file.Volume, found, index);
        if (cells.AsSpan().IndexOfAnyExcept((byte)0) < 0)
        {
            throw new InputException(displayName, null, found.Count <= 1
                ? "the volume is empty: every voxel is 0, which is air; name the label volume of the segmentation"
                : $"the volume holds no head: every label in it ({string.Join(", ", found.Keys.Order())}) is listed as air");
        }

        return (new(file.Volume.Grid, cells, known), [.. file.Warnings, .. Unused(displayName, known, found)]);
    }

    private static void CheckValues(ValueVolume volume)
    {
        if (volume.NotANumber + volume.Infinite > 0)
        {
            (int i, int j, int k) = volume.NonFiniteVoxels[0];
            throw new InputException(volume.Name, null, Invariant(
                $"{volume.NotANumber:N0} voxels are NaN and {volume.Infinite:N0} infinite, the first at voxel ({i}, {j}, {k}), {HeadChecks.Place(volume.Grid.Centre(i, j, k))}: a label volume holds whole numbers from 0 up; export the segmentation again"));
        }

        if (!volume.IsWhole || volume.Smallest < 0)
        {
            int at = First(volume, value => value < -ValueVolume.WholeNumberTolerance || !ValueVolume.IsWholeNumber(value));
            (int i, int j, int k) = volume.Grid.Voxel(at);
            double value = volume.Values[at];
            throw new InputException(volume.Name, null, Invariant(
                $"voxel ({i}, {j}, {k}) at {HeadChecks.Place(volume.Grid.Centre(i, j, k))} holds {value:G6}, which is {(value < 0 ? "negative" : "no whole number")}: a label volume holds whole numbers from 0 up (this one runs from {volume.Smallest:G6} to {volume.Largest:G6}: is it an image, a probability map, or resampled by interpolation?)"));
        }
    }

    private static int First(ValueVolume volume, Func<double, bool> wanted)
    {
        for (int at = 0; at < volume.Values.Count; at++)
        {
            if (wanted(volume.Values[at]))
            {
                return at;
            }
        }

        return 0;
    }

    private static (byte[] Cells, Dictionary<long, (int Count, int First)> Found) Cells(ValueVolume volume, Dictionary<long, byte> index)
    {
        var cells = new byte[volume.Grid.Count];
        Dictionary<long, (int Count, int First)> found = [];
        Span<double> stretch = stackalloc double[ValueVolume.Stretch];
        for (int start = 0; start < cells.Length; start += ValueVolume.Stretch)
        {
            Span<double> part = stretch[..Math.Min(ValueVolume.Stretch, cells.Length - start)];
            volume.Values.CopyTo(start, part);
            for (int n = 0; n < part.Length;)
            {
                // Labels stand in runs: a look-up for each run.
                int end = n + 1;
                while (end < part.Length && part[end] == part[n])
                {
                    end++;
                }

                long label = (long)Math.Round(part[n]);
                found[label] = found.TryGetValue(label, out (int Count, int First) before) ? (before.Count + end - n, before.First) : (end - n, start + n);
                cells.AsSpan(start + n, end - n).Fill(index.GetValueOrDefault(label));
                n = end;
            }
        }

        return (cells, found);
    }

    private static void CheckLabels(ValueVolume volume, Dictionary<long, (int Count, int First)> found, Dictionary<long, byte> index)
    {
        long[] unknown = [.. found.Keys.Where(label => !index.ContainsKey(label)).Order()];
        if (unknown.Length == 0)
        {
            return;
        }

        List<InputProblem> problems = [.. unknown.Take(MostListed).Select(label =>
        {
            (int count, int first) = found[label];
            (int i, int j, int k) = volume.Grid.Voxel(first);
            return new InputProblem(volume.Name, 0, 0, TissuesKey, Invariant(
                $"label {label} ({count:N0} voxel{(count == 1 ? "" : "s")}, the first at {HeadChecks.Place(volume.Grid.Centre(i, j, k))}) has no tissue; list it in the study, for instance `- {{label: {label}, tissue: grey, conductivity_S_per_m: 0.33}}`, or as air where it is none of the head"));
        })];
        if (unknown.Length > MostListed)
        {
            problems.Add(new(volume.Name, 0, 0, TissuesKey, Invariant($"and {unknown.Length - MostListed:N0} more labels without a tissue, up to {unknown[^1]}: is the file an image rather than labels?")));
        }

        throw new InputException(problems);
    }

    private static IEnumerable<string> Unused(string displayName, Tissue[] tissues, Dictionary<long, (int Count, int First)> found) =>
        tissues.Where(t => t.Kind != TissueKind.Air && !found.ContainsKey(t.Label)).Select(t => Invariant($"{displayName}: no voxel has label {t.Label} ({t.Name})"));
}
