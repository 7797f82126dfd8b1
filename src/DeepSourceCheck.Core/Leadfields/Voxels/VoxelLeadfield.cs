using System.Buffers;
using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Numerics.Multigrid;
using DeepSourceCheck.Core.Sensors;

namespace DeepSourceCheck.Core.Leadfields.Voxels;

// VoxelLeadfield.cs - leadfields from transfer rows.
//   L(sensor, axis) = sum over the dipole's nodes of weight(node, axis) T(node, sensor), for MEG plus the primary field.
//   The weights sum to zero, so T(node) - T(first node) may stand for T(node): neighbours differ by little, and single precision loses nothing in the sum.

/// <summary>EEG and MEG leadfields of a voxel head. The same rows give the same bytes, whether they were just solved for or come from a cache.</summary>
/// <remarks>EEG [V/(A m)] against the mean of the head's surface; MEG [T/(A m) or T/m/(A m)], total field. Immutable.</remarks>
public sealed class VoxelLeadfield : ILeadfieldSource
{
    private const int Lanes = LeadfieldBlock.Lanes, Width = ILoadBlocks.Lanes;

    private readonly TransferRows _rows;
    private readonly DipoleLoad _load;
    private readonly PrimaryField _primary;

    /// <param name="rows">Transfer rows of the head's nodes, complete.</param>
    /// <param name="load">Load of the dipoles, in the same mesh.</param>
    /// <param name="channels">The MEG channels of the rows.</param>
    /// <param name="figures">How the rows were solved for; null where that is not known.</param>
    /// <exception cref="ArgumentException">The channels are not those of the rows, in number.</exception>
    public VoxelLeadfield(TransferRows rows, DipoleLoad load, IReadOnlyList<MegChannel> channels, RowFigures? figures = null)
    {
        if (channels.Count != rows.Channels)
        {
            throw new ArgumentException($"{channels.Count} channels for rows of {rows.Channels}.", nameof(channels));
        }

        (_rows, _load, _primary) = (rows, load, new(channels));
        Method = VoxelMethod.Of(load, figures);
    }

    /// <inheritdoc/>
    public int EegRows => _rows.Electrodes;

    /// <inheritdoc/>
    public int MegRows => _rows.Channels;

    /// <inheritdoc/>
    public LeadfieldMethod Method { get; }

    /// <summary>The edge of a voxel [m]: within one the leadfield follows the weights of its nodes, not the field.</summary>
    public double? PositionStep => Math.Cbrt(_load.Tissue.Mesh.Volume.Grid.VoxelVolume);

    /// <summary>What carries a dipole at a place [m]: for counting those near the border of source tissue.</summary>
    /// <exception cref="ArgumentOutOfRangeException">The place is not in source tissue.</exception>
    public DipoleSupport SupportAt(Vec3 position) => _load.SupportAt(position);

    /// <inheritdoc/>
    /// <exception cref="ArgumentOutOfRangeException">A place is not in source tissue.</exception>
    public SupportCounts? Supports(ReadOnlyMemory<Vec3> positions, CancellationToken cancellation)
    {
        if (_load is not MonopoleLoad)
        {
            return null;                    // the element's gradient carries every dipole alike
        }

        const int part = 1024;
        int[] counts = new int[Enum.GetValues<DipoleSupport>().Length];
        Parallel.For(0, (positions.Length + part - 1) / part, new ParallelOptions { CancellationToken = cancellation }, n =>
        {
            Span<int> own = stackalloc int[counts.Length];
            own.Clear();
            foreach (Vec3 position in positions.Span.Slice(n * part, Math.Min(part, positions.Length - n * part)))
            {
                own[(int)_load.SupportAt(position)]++;
            }

            for (int k = 0; k < counts.Length; k++)
            {
                Interlocked.Add(ref counts[k], own[k]);
            }
        });
        return new(counts[(int)DipoleSupport.Whole], counts[(int)DipoleSupport.Partial], counts[(int)DipoleSupport.Border], counts[(int)DipoleSupport.Element]);
    }

    /// <inheritdoc/>
    /// <exception cref="ArgumentException">The block has other numbers of rows.</exception>
    /// <exception cref="ArgumentOutOfRangeException">A dipole is not in source tissue.</exception>
    /// <exception cref="InvalidOperationException">The rows were kept for other dipoles.</exception>
    public void Fill(LeadfieldBlock block)
    {
        if (block.EegRows != EegRows || block.MegRows != MegRows)
        {
            throw new ArgumentException(
                $"The block holds {block.EegRows} electrodes and {block.MegRows} channels; the head has {EegRows} and {MegRows}.", nameof(block));
        }

        int stride = _rows.Stride;
        float[] sums = ArrayPool<float>.Shared.Rent(Lanes * 3 * stride);
        try
        {
            for (int lane = 0; lane < block.Count; lane++)
            {
                Gather(block.Positions[lane], sums.AsSpan(lane * 3 * stride, 3 * stride));
            }

            Interleave(sums, block.Count, 0, block.Eeg);
            Interleave(sums, block.Count, EegRows, block.Meg);
        }
        finally
        {
            ArrayPool<float>.Shared.Return(sums);
        }

        _primary.Add(block);
    }

    // [axis][sensor] of one dipole.
    private void Gather(Vec3 position, Span<float> sums)
    {
        Span<int> nodes = stackalloc int[DipoleLoad.MostNodes];
        Span<Vec3> weights = stackalloc Vec3[DipoleLoad.MostNodes];
        Span<float> shares = stackalloc float[3 * DipoleLoad.MostNodes];
        int count = _load.Place(position, nodes, weights, out _);
        int stride = _rows.Stride;
        for (int n = 0; n < count; n++)
        {
            int row = _rows.Kept.RowOf(nodes[n]);
            if (row < 0)
            {
                throw new InvalidOperationException($"No row is kept for a node that a dipole at {position} needs.");
            }

            nodes[n] = row;
            (shares[3 * n], shares[3 * n + 1], shares[3 * n + 2]) = ((float)weights[n].X, (float)weights[n].Y, (float)weights[n].Z);
        }

        ReadOnlySpan<float> values = _rows.Values;
        ref float all = ref MemoryMarshal.GetReference(values);
        ref float x = ref MemoryMarshal.GetReference(sums), y = ref Unsafe.Add(ref x, stride), z = ref Unsafe.Add(ref y, stride);
        int sensor = 0;
        for (; sensor + 2 * Width <= stride; sensor += 2 * Width)
        {
            ref float column = ref Unsafe.Add(ref all, sensor);
            ref float start = ref Unsafe.Add(ref column, (nint)nodes[0] * stride);
            Vector512<float> first = Vector512.LoadUnsafe(ref start), second = Vector512.LoadUnsafe(ref start, Width);
            Vector512<float> x0 = default, y0 = default, z0 = default, x1 = default, y1 = default, z1 = default;
            ref float share = ref MemoryMarshal.GetReference(shares);
            for (int n = 1; n < count; n++)
            {
                share = ref Unsafe.Add(ref share, 3);
                ref float row = ref Unsafe.Add(ref column, (nint)Unsafe.Add(ref MemoryMarshal.GetReference(nodes), n) * stride);
                Vector512<float> a = Vector512.LoadUnsafe(ref row) - first, b = Vector512.LoadUnsafe(ref row, Width) - second;
                Vector512<float> wx = Vector512.Create(share), wy = Vector512.Create(Unsafe.Add(ref share, 1)), wz = Vector512.Create(Unsafe.Add(ref share, 2));
                x0 = Fma(a, wx, x0);
                y0 = Fma(a, wy, y0);
                z0 = Fma(a, wz, z0);
                x1 = Fma(b, wx, x1);
                y1 = Fma(b, wy, y1);
                z1 = Fma(b, wz, z1);
            }

            x0.StoreUnsafe(ref Unsafe.Add(ref x, sensor));
            y0.StoreUnsafe(ref Unsafe.Add(ref y, sensor));
            z0.StoreUnsafe(ref Unsafe.Add(ref z, sensor));
            x1.StoreUnsafe(ref Unsafe.Add(ref x, sensor + Width));
            y1.StoreUnsafe(ref Unsafe.Add(ref y, sensor + Width));
            z1.StoreUnsafe(ref Unsafe.Add(ref z, sensor + Width));
        }

        if (sensor < stride)
        {
            ref float column = ref Unsafe.Add(ref all, sensor);
            Vector512<float> first = Vector512.LoadUnsafe(ref Unsafe.Add(ref column, (nint)nodes[0] * stride)), x0 = default, y0 = default, z0 = default;
            for (int n = 1; n < count; n++)
            {
                Vector512<float> a = Vector512.LoadUnsafe(ref Unsafe.Add(ref column, (nint)nodes[n] * stride)) - first;
                x0 = Fma(a, Vector512.Create(shares[3 * n]), x0);
                y0 = Fma(a, Vector512.Create(shares[3 * n + 1]), y0);
                z0 = Fma(a, Vector512.Create(shares[3 * n + 2]), z0);
            }

            x0.StoreUnsafe(ref Unsafe.Add(ref x, sensor));
            y0.StoreUnsafe(ref Unsafe.Add(ref y, sensor));
            z0.StoreUnsafe(ref Unsafe.Add(ref z, sensor));
        }
    }

    // [lane][axis][sensor] from a sensor on to [row][axis][lane]; lanes that are not in use repeat the last one.
    private void Interleave(ReadOnlySpan<float> sums, int count, int firstSensor, Span<double> block)
    {
        int stride = _rows.Stride, rows = block.Length / (3 * Lanes);
        for (int lane = 0; lane < Lanes; lane++)
        {
            ReadOnlySpan<float> of = sums.Slice(Math.Min(lane, count - 1) * 3 * stride + firstSensor);
            ref double to = ref Unsafe.Add(ref MemoryMarshal.GetReference(block), lane);
            for (int axis = 0; axis < 3; axis++)
            {
                ref float from = ref MemoryMarshal.GetReference(of.Slice(axis * stride, rows));
                for (int row = 0; row < rows; row++)
                {
                    Unsafe.Add(ref to, (row * 3 + axis) * Lanes) = Unsafe.Add(ref from, row);
                }
            }
        }
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector512<float> Fma(Vector512<float> a, Vector512<float> b, Vector512<float> c) => Vector512.MultiplyAddEstimate(a, b, c);
}
