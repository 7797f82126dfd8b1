using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Numerics.Multigrid;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Leadfields.Voxels;

// TransferRows.cs - T = R' K^-1, one column a sensor, kept by node: the potential or field that one ampere into a node gives at every sensor.
// Source: [Weinstein et al. 2000], [Gencer & Acar 2004].

/// <summary>Transfer rows of kept nodes, single precision, node by node, sensors side by side: electrodes [V/A], then MEG channels [T/A or T/m/A].</summary>
/// <remarks>
/// A row is padded to whole vectors of sixteen and starts at a cache line. Filled by <see cref="Take"/>, which may run on several threads for different blocks; read only afterwards.
/// The potential of a row is defined up to a constant a sensor, which no dipole sees: its weights sum to zero.
/// </remarks>
public sealed class TransferRows
{
    private const int Lanes = ILoadBlocks.Lanes, CacheLine = 64;

    /// <summary>Values that rows can hold at most: what one array holds.</summary>
    public static readonly long MostValues = Array.MaxLength - Lanes;

    private readonly float[] _values;
    private readonly int _start;

    /// <param name="kept">Nodes.</param>
    /// <param name="electrodes">Number of electrodes.</param>
    /// <param name="channels">Number of MEG channels.</param>
    /// <exception cref="ArgumentOutOfRangeException">No sensor, or more than <see cref="MostValues"/>: whoever plans asks <see cref="ValuesFor"/> first.</exception>
    public TransferRows(KeptNodes kept, int electrodes, int channels)
    {
        ArgumentOutOfRangeException.ThrowIfNegative(electrodes);
        ArgumentOutOfRangeException.ThrowIfNegative(channels);
        ArgumentOutOfRangeException.ThrowIfZero(electrodes + channels);
        (Kept, Electrodes, Channels, Stride) = (kept, electrodes, channels, (int)Padded(electrodes + channels));
        long length = ValuesFor(kept.Count, electrodes + channels);
        ArgumentOutOfRangeException.ThrowIfGreaterThan(length, MostValues, nameof(kept));
        _values = GC.AllocateArray<float>((int)length + Lanes, pinned: true);
        nint beyond = Marshal.UnsafeAddrOfPinnedArrayElement(_values, 0) % CacheLine;
        _start = beyond == 0 ? 0 : (int)(CacheLine - beyond) / sizeof(float);
    }

    /// <summary>Nodes that have a row.</summary>
    public KeptNodes Kept { get; }

    /// <summary>Number of electrodes.</summary>
    public int Electrodes { get; }

    /// <summary>Number of MEG channels.</summary>
    public int Channels { get; }

    /// <summary>Values from one row to the next: the number of sensors, rounded up to sixteen.</summary>
    public int Stride { get; }

    /// <summary>All values, row after row, [V/A], [T/A] or [T/m/A].</summary>
    public ReadOnlySpan<float> Values => Whole;

    private Span<float> Whole => _values.AsSpan(_start, Kept.Count * Stride);

    /// <summary>Memory of the rows of so many nodes and sensors [bytes].</summary>
    public static long BytesFor(int nodes, int sensors) => ValuesFor(nodes, sensors) * sizeof(float);

    /// <summary>Values of the rows of so many nodes and sensors, padding counted.</summary>
    public static long ValuesFor(long nodes, long sensors) => nodes * Padded(sensors);

    /// <summary>Takes the solution of a block of right-hand sides of <see cref="SensorLoads"/>.</summary>
    /// <param name="block">Number of the block.</param>
    /// <param name="potentials">[node of the mesh][16 lanes].</param>
    public void Take(int block, ReadOnlySpan<float> potentials)
    {
        Span<float> scales = stackalloc float[Lanes];
        for (int lane = 0; lane < Lanes; lane++)
        {
            int sensor = block * Lanes + lane;
            scales[lane] = sensor < Electrodes ? 1 : sensor < Electrodes + Channels ? (float)Si.Mu0Over4Pi : 0;
        }

        ReadOnlySpan<Vector512<float>> solved = MemoryMarshal.Cast<float, Vector512<float>>(potentials);
        Span<Vector512<float>> rows = MemoryMarshal.Cast<float, Vector512<float>>(Whole);
        Vector512<float> scale = Vector512.Create<float>(scales);
        int stride = Stride / Lanes;
        ReadOnlySpan<int> nodes = Kept.Nodes;
        for (int row = 0; row < nodes.Length; row++)
        {
            rows[row * stride + block] = scale * solved[nodes[row]];
        }
    }

    /// <summary>Overwrites values from a store, which must hold those of the same nodes and sensors; for reading a cache. Several threads may, each with its own stretch.</summary>
    /// <param name="start">First value.</param>
    /// <param name="count">Number of values.</param>
    /// <param name="read">Overwrites what it is given.</param>
    public void Load(int start, int count, Action<Span<float>> read) => read(Whole.Slice(start, count));

    private static long Padded(long sensors) => (sensors + Lanes - 1) / Lanes * Lanes;
}
