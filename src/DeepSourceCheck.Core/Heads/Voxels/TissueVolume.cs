using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Heads.Voxels;

/// <summary>A head as a volume of tissues: one byte a voxel, the index of its tissue.</summary>
/// <remarks>Immutable; big arrays are shown as spans. Voxels without a conductor are air, index 0.</remarks>
public sealed class TissueVolume
{
    /// <summary>Most tissues of a head, air included.</summary>
    public const int MostTissues = 255;

    private readonly byte[] _cells;

    /// <param name="grid">Where the voxels lie.</param>
    /// <param name="cells">Index of the tissue of each voxel, first axis fastest; kept, not copied.</param>
    /// <param name="tissues">Tissues; the first is air.</param>
    /// <exception cref="ArgumentException">Lengths differ, an index has no tissue, or the first tissue is not air.</exception>
    public TissueVolume(VoxelGrid grid, byte[] cells, IReadOnlyList<Tissue> tissues)
    {
        if (cells.Length != grid.Count)
        {
            throw new ArgumentException($"{cells.Length} values for {grid.Count} voxels.", nameof(cells));
        }

        if (tissues.Count is 0 or > MostTissues || tissues[0].Kind != TissueKind.Air)
        {
            throw new ArgumentException("The first tissue must be air.", nameof(tissues));
        }

        if (cells.AsSpan().ContainsAnyExceptInRange((byte)0, (byte)(tissues.Count - 1)))
        {
            throw new ArgumentException("A voxel has no tissue.", nameof(cells));
        }

        (Grid, _cells, Tissues) = (grid, cells, tissues);
    }

    /// <summary>Where the voxels lie.</summary>
    public VoxelGrid Grid { get; }

    /// <summary>Tissues by index; the first is air.</summary>
    public IReadOnlyList<Tissue> Tissues { get; }

    /// <summary>Index of the tissue of each voxel, first axis fastest.</summary>
    public ReadOnlySpan<byte> Cells => _cells;

    /// <summary>The tissue that holds a point [m]; air outside the volume.</summary>
    public Tissue At(Vec3 world) => Tissues[Grid.IndexAt(world) is >= 0 and int index ? _cells[index] : 0];
}
