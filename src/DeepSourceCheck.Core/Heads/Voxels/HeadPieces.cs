using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Heads.Voxels;

/// <summary>A head and what does not hang together with it.</summary>
/// <param name="Volume">The largest piece alone.</param>
/// <param name="LeftOut">The other pieces, the largest first.</param>
public sealed record HeadPieces(TissueVolume Volume, IReadOnlyList<VoxelPiece> LeftOut)
{
    /// <summary>Keeps the largest piece of a head: no current reaches the others, and sensors must not be put on them.</summary>
    /// <param name="volume">The head; voxels that share a face, an edge or a corner hang together, as their finite elements do.</param>
    public static HeadPieces Largest(TissueVolume volume)
    {
        TissueVolume all = volume;
        IReadOnlyList<VoxelPiece> pieces = ConnectedVoxels.Find(volume.Grid, at => all.Cells[at] != 0, corners: true);
        if (pieces.Count <= 1)
        {
            return new(volume, []);
        }

        byte[] cells = volume.Cells.ToArray();
        foreach ((int start, int length) in pieces.Skip(1).SelectMany(p => p.Runs))
        {
            cells.AsSpan(start, length).Clear();
        }

        return new(new(volume.Grid, cells, volume.Tissues), [.. pieces.Skip(1)]);
    }
}
