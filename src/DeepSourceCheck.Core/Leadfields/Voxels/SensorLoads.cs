using DeepSourceCheck.Core.Numerics.Multigrid;

namespace DeepSourceCheck.Core.Leadfields.Voxels;

/// <summary>The right-hand sides of all sensors in blocks of sixteen: electrodes first, then MEG channels. A block may hold both.</summary>
public sealed class SensorLoads : ILoadBlocks
{
    private readonly ElectrodeLoad _electrodes;
    private readonly CoilLoad _coils;

    /// <param name="electrodes">Loads of the electrodes.</param>
    /// <param name="coils">Loads of the channels.</param>
    public SensorLoads(ElectrodeLoad electrodes, CoilLoad coils) => (_electrodes, _coils) = (electrodes, coils);

    /// <summary>Number of electrodes.</summary>
    public int Electrodes => _electrodes.Count;

    /// <summary>Number of MEG channels.</summary>
    public int Channels => _coils.Count;

    /// <inheritdoc/>
    public int Count => _electrodes.Count + _coils.Count;

    /// <inheritdoc/>
    public void Fill(int block, Span<float> values)
    {
        values.Clear();
        int first = block * ILoadBlocks.Lanes, end = Math.Min(Count, first + ILoadBlocks.Lanes), border = _electrodes.Count;
        ArgumentOutOfRangeException.ThrowIfNegative(block);
        ArgumentOutOfRangeException.ThrowIfGreaterThanOrEqual(first, Count, nameof(block));
        if (first < border)
        {
            _electrodes.Add(first, Math.Min(end, border) - first, 0, values);
        }

        if (end > border)
        {
            int from = Math.Max(first, border);
            _coils.Add(from - border, end - from, from - first, values);
        }
    }
}
