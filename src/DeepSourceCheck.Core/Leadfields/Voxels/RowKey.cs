using System.Runtime.InteropServices;
using System.Security.Cryptography;
using System.Text;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Sensors;

namespace DeepSourceCheck.Core.Leadfields.Voxels;

/// <summary>The name of transfer rows in a cache: a hash of all that they depend on, and of nothing else.</summary>
/// <remarks>
/// Geometry, moved nodes, conductivities, tensors, places of sensors, kept nodes, solver settings and the format's version. Names, regions, responses and the load of dipoles do
/// not enter: changing them finds the same rows.
/// </remarks>
public static class RowKey
{
    /// <summary>Raised whenever the same inputs would give other rows: by another discretisation, load or solver.</summary>
    public const int FormatVersion = 2;

    private const int Stretch = 4096;

    /// <summary>SHA-256 as 64 lower-case hexadecimal digits.</summary>
    /// <param name="mesh">Elements.</param>
    /// <param name="tensors">Tensors of some voxels, or null.</param>
    /// <param name="electrodes">Electrodes.</param>
    /// <param name="channels">MEG channels.</param>
    /// <param name="kept">Nodes that have rows.</param>
    /// <param name="settings">Settings of the solver that change its digits, in any fixed wording.</param>
    public static string Of(
        HexMesh mesh, ConductivityTensors? tensors, IReadOnlyList<Electrode> electrodes, IReadOnlyList<MegChannel> channels, KeptNodes kept, string settings)
    {
        using IncrementalHash hash = IncrementalHash.CreateHash(HashAlgorithmName.SHA256);
        VoxelGrid grid = mesh.Volume.Grid;
        byte[] words = Encoding.UTF8.GetBytes(settings);
        Add<int>(hash, [FormatVersion, grid.Nx, grid.Ny, grid.Nz, mesh.Volume.Tissues.Count, mesh.IsAdapted ? 1 : 0, tensors?.Count ?? 0, electrodes.Count, channels.Count, kept.Count, words.Length]);
        hash.AppendData(words);
        Affine a = grid.ToWorld;
        Add<Vec3>(hash, [a.Row0, a.Row1, a.Row2, a.Offset]);
        Add<double>(hash, [.. mesh.Volume.Tissues.Select(t => t.Conductivity)]);
        hash.AppendData(mesh.Volume.Cells);
        if (mesh.IsAdapted)
        {
            AddAll(hash, mesh.Nodes.Count, mesh.Shift);
        }

        if (tensors is { Count: > 0 })
        {
            AddAll(hash, grid.Count, voxel => tensors.TryGet(voxel, out SymmetricTensor tensor) ? tensor : default);
        }

        Add<Vec3>(hash, [.. electrodes.Select(e => e.Position)]);
        Add<int>(hash, [.. channels.Select(c => c.Points.Count)]);
        Add<CoilPoint>(hash, [.. channels.SelectMany(c => c.Points)]);
        Add(hash, kept.Nodes);
        return Convert.ToHexStringLower(hash.GetHashAndReset());
    }

    private static void Add<T>(IncrementalHash hash, ReadOnlySpan<T> values)
        where T : unmanaged => hash.AppendData(MemoryMarshal.AsBytes(values));

    private static void AddAll<T>(IncrementalHash hash, int count, Func<int, T> value)
        where T : unmanaged
    {
        var some = new T[Stretch];
        for (int start = 0; start < count; start += Stretch)
        {
            int length = Math.Min(Stretch, count - start);
            for (int n = 0; n < length; n++)
            {
                some[n] = value(start + n);
            }

            Add<T>(hash, some.AsSpan(0, length));
        }
    }
}
