using System.Numerics;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Files.Nifti;

using static System.FormattableString;

namespace DeepSourceCheck.Files.Heads;

/// <summary>Conductivity tensors as read.</summary>
/// <param name="Tensors">Those of the head's voxels.</param>
/// <param name="Means">Mean conductivity, a third of the trace [S/m], by name of the tissue.</param>
/// <param name="Warnings">What the user must know.</param>
public sealed record TensorReading(ConductivityTensors Tensors, IReadOnlyDictionary<string, double> Means, IReadOnlyList<string> Warnings);

/// <summary>Reads conductivity tensors: NIfTI with five dimensions and intent code 1005, the lower triangle xx, xy, yy, xz, yz, zz in S/m and in world axes (right, front, up).</summary>
/// <remarks>
/// Source: the NIfTI-1 standard, intent code 1005 (symmetric matrix, rows of the lower triangle). The standard does not say in which axes: here they are those of the world, not of the voxels.
/// A voxel whose tensor is zero or not finite has none: its tissue's own conductivity stands in, said in a warning.
/// </remarks>
public static class TensorVolumeReader
{
    private const string FileKey = "head.voxels.tensors.file";
    private const int Entries = 6;

    /// <summary>Distance [voxels], without unit, by which the corners of both grids may differ: rounding of single precision.</summary>
    private const double GridTolerance = 0.01;

    /// <summary>Angle [rad] by which voxel and world axes may differ without a word: a tensor of the greatest anisotropy then changes by less than a hundredth.</summary>
    private const double TurnTolerance = 0.01;

    /// <summary>Reads the tensors of some tissues.</summary>
    /// <param name="path">The file.</param>
    /// <param name="displayName">As the user named it.</param>
    /// <param name="labels">Grid of the label volume's file, on which the tensors must lie.</param>
    /// <param name="head">The head, cut out of that grid.</param>
    /// <param name="tissues">Names of the tissues that take their tensors.</param>
    /// <exception cref="InputException">The file cannot be read, lies on another grid, has a tensor that is not positive definite, or none for the tissues.</exception>
    public static TensorReading Read(string path, string displayName, VoxelGrid labels, TissueVolume head, IReadOnlyList<string> tissues)
    {
        bool[] chosen = [.. head.Tissues.Select(t => t.Kind != TissueKind.Air && tissues.Contains(t.Name))];
        var has = new ulong[(head.Grid.Count + 63) / 64];
        int count = 0;
        for (int at = 0; at < head.Grid.Count; at++)
        {
            if (chosen[head.Cells[at]])
            {
                has[at >> 6] |= 1UL << at;
                count++;
            }
        }

        if (count == 0)
        {
            throw new InputException(displayName, FileKey, $"no voxel of the head is {string.Join(" or ", tissues)}, which take their tensors from this file; remove head.voxels.tensors, or name another tissue");
        }

        var values = new float[Entries * count];
        IReadOnlyList<string> warnings = NiftiReader.ReadTensors(path, displayName, header => CheckGrid(header, labels, displayName),
            (entry, volume) => Take(volume, entry, labels, head, has, values));
        (ConductivityTensors tensors, int missing) = Checked(head, has, values, displayName);
        if (tensors.Count == 0)
        {
            throw new InputException(displayName, FileKey, $"every tensor of {string.Join(", ", tissues)} is zero or not finite; name the file that holds their conductivities in S/m");
        }

        string[] gaps = missing == 0 ? [] : [Invariant(
            $"{displayName}: {missing:N0} of {count:N0} voxels of {string.Join(", ", tissues)} ({100.0 * missing / count:0.#} %) have no tensor (zero or not finite); the tissue's own conductivity stands in there")];
        return new(tensors, Means(head, tensors), [.. warnings, .. AxesWarning(labels, displayName) is { } turned ? [turned] : Array.Empty<string>(), .. gaps]);
    }

    /// <summary>Where voxel axes and world axes differ, files that hold tensors in voxel axes look the same and mean others: says which axes were taken.</summary>
    private static string? AxesWarning(VoxelGrid grid, string displayName)
    {
        Vec3[] world = [new(1, 0, 0), new(0, 1, 0), new(0, 0, 1)];
        string[] names = ["right", "front", "up"], opposite = ["left", "back", "down"];
        Vec3[] axes = [.. Enumerable.Range(0, 3).Select(axis => grid.ToWorld.Column(axis).Unit())];
        double[] off = [.. axes.Select((axis, k) => Math.Atan2(Vec3.Cross(axis, world[k]).Norm, Vec3.Dot(axis, world[k])))];
        if (off.Max() <= TurnTolerance)
        {
            return null;
        }

        // A flip or a swap of axes is named by where the voxel axes point, what is left as the angle from there.
        int[] nearest = [.. axes.Select(axis => Enumerable.Range(0, 3).MaxBy(k => Math.Abs(Vec3.Dot(axis, world[k]))))];
        string[] towards = [.. axes.Select((axis, k) => Vec3.Dot(axis, world[nearest[k]]) > 0 ? names[nearest[k]] : opposite[nearest[k]])];
        double angle = axes.Select((axis, k) => Math.Atan2(Vec3.Cross(axis, world[nearest[k]]).Norm, Math.Abs(Vec3.Dot(axis, world[nearest[k]])))).Max();
        bool plain = towards.SequenceEqual(names);
        string how = (plain, angle > TurnTolerance) switch
        {
            (true, _) => Invariant($"are turned by up to {Si.ToDegrees(angle):0.0} degrees against those of the world"),
            (false, false) => $"point to the {string.Join(", ", towards)}",
            _ => Invariant($"point to the {string.Join(", ", towards)}, turned by up to {Si.ToDegrees(angle):0.0} degrees"),
        };
        return $"{displayName}: its voxel axes {how}; the tensors were taken in world axes (x right, y front, z up). Programs that write them in voxel axes are common: then rotate the tensors into world axes first, or fibres run the wrong way";
    }

    private static void CheckGrid(NiftiHeader header, VoxelGrid labels, string displayName)
    {
        VoxelGrid grid = header.Grid;
        if ((grid.Nx, grid.Ny, grid.Nz) != (labels.Nx, labels.Ny, labels.Nz))
        {
            throw new InputException(displayName, "dim", $"the tensors have {grid.Nx} x {grid.Ny} x {grid.Nz} voxels, the labels {labels.Nx} x {labels.Ny} x {labels.Nz}: both must lie on the same grid; resample the tensors onto that of the labels");
        }

        Affine toIndex = labels.ToWorld.Inverse();
        double worst = 0;
        for (int corner = 0; corner < 8; corner++)
        {
            Vec3 v = new((corner & 1) * (grid.Nx - 1.0), (corner >> 1 & 1) * (grid.Ny - 1.0), (corner >> 2) * (grid.Nz - 1.0));
            worst = Math.Max(worst, (toIndex.Apply(grid.ToWorld.Apply(v)) - v).Norm);
        }

        if (!(worst <= GridTolerance) || !header.IsPlaced)
        {
            throw new InputException(displayName, "srow", header.IsPlaced
                ? Invariant($"the tensors' grid lies up to {worst:0.##} voxels away from that of the labels: both must be the same; resample the tensors onto the grid of the labels")
                : "the file states no orientation (sform_code and qform_code are 0), so nobody knows to which voxels the tensors belong; give the file the sform of the labels");
        }
    }

    private static void Take(VoxelValues volume, int entry, VoxelGrid labels, TissueVolume head, ulong[] has, float[] values)
    {
        VoxelGrid grid = head.Grid;
        Vec3 shift = labels.ToWorld.Inverse().Apply(grid.Centre(0, 0, 0));
        (int i0, int j0, int k0) = ((int)Math.Round(shift.X), (int)Math.Round(shift.Y), (int)Math.Round(shift.Z));
        int next = entry;
        for (int word = 0; word < has.Length; word++)
        {
            for (ulong rest = has[word]; rest != 0; rest &= rest - 1)
            {
                (int i, int j, int k) = grid.Voxel(64 * word + BitOperations.TrailingZeroCount(rest));
                values[next] = (float)volume[labels.Index(i + i0, j + j0, k + k0)];
                next += Entries;
            }
        }
    }

    /// <summary>The tensors without gaps, and the number of gaps.</summary>
    private static (ConductivityTensors Tensors, int Missing) Checked(TissueVolume head, ulong[] has, float[] values, string displayName)
    {
        int from = 0, to = 0, faults = 0;
        string? first = null;
        for (int word = 0; word < has.Length; word++)
        {
            for (ulong rest = has[word]; rest != 0; rest &= rest - 1, from += Entries)
            {
                SymmetricTensor t = new(values[from], values[from + 1], values[from + 2], values[from + 3], values[from + 4], values[from + 5]);
                ulong bit = rest & (~rest + 1);
                if (!t.IsFinite || t.IsZero)
                {
                    has[word] &= ~bit;
                    continue;
                }

                if (!t.IsPositiveDefinite)
                {
                    (int i, int j, int k) = head.Grid.Voxel(64 * word + BitOperations.TrailingZeroCount(bit));
                    first ??= Invariant($"at {HeadChecks.Place(head.Grid.Centre(i, j, k))} it is xx {t.Xx:G4}, xy {t.Xy:G4}, yy {t.Yy:G4}, xz {t.Xz:G4}, yz {t.Yz:G4}, zz {t.Zz:G4} S/m");
                    faults++;
                }

                values.AsSpan(from, Entries).CopyTo(values.AsSpan(to));
                to += Entries;
            }
        }

        return faults == 0
            ? (new(has, values[..to]), (from - to) / Entries)
            : throw new InputException(displayName, FileKey, Invariant(
                $"{faults:N0} tensor{(faults == 1 ? " is" : "s are")} not positive definite, so that current would run against the field: {first}; the entries must stand in the order xx, xy, yy, xz, yz, zz, and every eigenvalue be above 0"));
    }

    private static Dictionary<string, double> Means(TissueVolume head, ConductivityTensors tensors)
    {
        Dictionary<string, (double Sum, int Count)> sums = [];
        for (int at = 0; at < head.Grid.Count; at++)
        {
            if (tensors.TryGet(at, out SymmetricTensor tensor))
            {
                string name = head.Tissues[head.Cells[at]].Name;
                (double sum, int count) = sums.GetValueOrDefault(name);
                sums[name] = (sum + tensor.Mean, count + 1);
            }
        }

        return sums.ToDictionary(s => s.Key, s => s.Value.Sum / s.Value.Count);
    }
}
