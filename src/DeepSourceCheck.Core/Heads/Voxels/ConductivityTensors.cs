using System.Numerics;

namespace DeepSourceCheck.Core.Heads.Voxels;

/// <summary>Conductivity tensors of some voxels of a head; the others conduct alike in every direction.</summary>
/// <remarks>Kept in single precision for the voxels that have one alone: 24 bytes each, and 12 bytes for every 64 voxels of the head to find them. Immutable.</remarks>
public sealed class ConductivityTensors
{
    private const int Entries = 6;

    private readonly ulong[] _has;
    private readonly int[] _before;
    private readonly float[] _values;

    /// <param name="has">Bit n % 64 of word n / 64 is set where voxel n of the head has a tensor.</param>
    /// <param name="values">Six entries [S/m] for each such voxel, in the order of the voxels: xx, xy, yy, xz, yz, zz; kept, not copied.</param>
    /// <exception cref="ArgumentException">The number of values does not fit the bits.</exception>
    public ConductivityTensors(ulong[] has, float[] values)
    {
        _before = new int[has.Length];
        int count = 0;
        for (int word = 0; word < has.Length; word++)
        {
            _before[word] = count;
            count += BitOperations.PopCount(has[word]);
        }

        if (values.Length != Entries * count)
        {
            throw new ArgumentException($"{values.Length} entries for {count} tensors.", nameof(values));
        }

        (_has, _values) = (has, values);
    }

    /// <summary>Voxels that have a tensor.</summary>
    public int Count => _values.Length / Entries;

    /// <summary>The tensor of a voxel, by its position in the head's memory; false where it has none.</summary>
    public bool TryGet(int voxel, out SymmetricTensor tensor)
    {
        ulong word = _has[voxel >> 6], bit = 1UL << voxel;
        if ((word & bit) == 0)
        {
            tensor = default;
            return false;
        }

        int at = Entries * (_before[voxel >> 6] + BitOperations.PopCount(word & (bit - 1)));
        tensor = new(_values[at], _values[at + 1], _values[at + 2], _values[at + 3], _values[at + 4], _values[at + 5]);
        return true;
    }
}
