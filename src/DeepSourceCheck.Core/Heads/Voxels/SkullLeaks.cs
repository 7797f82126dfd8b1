using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Heads.Voxels;

/// <summary>Where a tissue outside the skull meets one inside it.</summary>
/// <param name="Outer">The tissue outside: scalp or air.</param>
/// <param name="Inner">The tissue inside: CSF, grey or white matter.</param>
/// <param name="Voxels">Voxels of the inner tissue that meet the outer one.</param>
/// <param name="AlongEdges">Of those, the ones that meet it along an edge alone, between two voxels of bone: finite elements conduct there too.</param>
/// <param name="Places">The connected places of those voxels, the largest first.</param>
public sealed record SkullLeak(Tissue Outer, Tissue Inner, int Voxels, int AlongEdges, IReadOnlyList<VoxelPiece> Places);

/// <summary>Finds where the skull does not part what is outside it from what is inside.</summary>
public static class SkullLeaks
{
    private static readonly (int I, int J, int K)[] Faces = [(-1, 0, 0), (1, 0, 0), (0, -1, 0), (0, 1, 0), (0, 0, -1), (0, 0, 1)];

    /// <summary>The leaks, by pair of tissues, the one with most voxels first.</summary>
    /// <param name="volume">The head with its margin.</param>
    /// <param name="touched">Faces of the file's volume that the head touches: beyond them nothing is known, so that the air there makes no leak.</param>
    public static IReadOnlyList<SkullLeak> Find(TissueVolume volume, IReadOnlyList<TouchedFace> touched)
    {
        var known = new KnownBox(volume.Grid, touched);
        Dictionary<(int Outer, int Inner), Dictionary<int, bool>> contacts = [];
        for (int k = 0; k < volume.Grid.Nz; k++)
        {
            for (int j = 0; j < volume.Grid.Ny; j++)
            {
                for (int i = 0; i < volume.Grid.Nx; i++)
                {
                    byte inner = volume.Cells[volume.Grid.Index(i, j, k)];
                    if (VoxelHead.IsInSkull(volume.Tissues[inner].Kind))
                    {
                        Look(volume, known, (i, j, k), inner, contacts);
                    }
                }
            }
        }

        return [.. contacts.Select(pair => Leak(volume, pair.Key, pair.Value)).OrderByDescending(l => l.Voxels).ThenBy(l => l.Outer.Label).ThenBy(l => l.Inner.Label)];
    }

    /// <summary>Notes what an inner voxel meets across its faces, and along edges whose two other voxels are bone.</summary>
    private static void Look(TissueVolume volume, KnownBox known, (int I, int J, int K) at, byte inner, Dictionary<(int, int), Dictionary<int, bool>> contacts)
    {
        int index = volume.Grid.Index(at.I, at.J, at.K);
        for (int a = 0; a < Faces.Length; a++)
        {
            (int I, int J, int K) beside = Moved(at, Faces[a]);
            if (!known.Holds(beside))
            {
                continue;
            }

            byte outer = volume.Cells[volume.Grid.Index(beside.I, beside.J, beside.K)];
            TissueKind kind = volume.Tissues[outer].Kind;
            if (IsOutside(kind))
            {
                Note(contacts, outer, inner, index, alongEdge: false);
            }
            else if (kind == TissueKind.Skull)
            {
                // Edges: from here a step along a later axis; the fourth voxel must be bone as well.
                for (int b = (a / 2 + 1) * 2; b < Faces.Length; b++)
                {
                    (int I, int J, int K) across = Moved(beside, Faces[b]), fourth = Moved(at, Faces[b]);
                    if (known.Holds(across) && known.Holds(fourth) && KindAt(volume, fourth) == TissueKind.Skull && IsOutside(KindAt(volume, across)))
                    {
                        Note(contacts, volume.Cells[volume.Grid.Index(across.I, across.J, across.K)], inner, index, alongEdge: true);
                    }
                }
            }
        }
    }

    private static void Note(Dictionary<(int, int), Dictionary<int, bool>> contacts, byte outer, byte inner, int index, bool alongEdge)
    {
        if (!contacts.TryGetValue((outer, inner), out Dictionary<int, bool>? voxels))
        {
            contacts[(outer, inner)] = voxels = [];
        }

        voxels[index] = voxels.TryGetValue(index, out bool edgeAlone) ? edgeAlone && alongEdge : alongEdge;
    }

    private static SkullLeak Leak(TissueVolume volume, (int Outer, int Inner) pair, Dictionary<int, bool> voxels) => new(
        volume.Tissues[pair.Outer],
        volume.Tissues[pair.Inner],
        voxels.Count,
        voxels.Count(v => v.Value),
        ConnectedVoxels.Find(volume.Grid, voxels.ContainsKey, corners: true));

    private static bool IsOutside(TissueKind kind) => kind is TissueKind.Scalp or TissueKind.Air;

    private static TissueKind KindAt(TissueVolume volume, (int I, int J, int K) v) => volume.Tissues[volume.Cells[volume.Grid.Index(v.I, v.J, v.K)]].Kind;

    private static (int I, int J, int K) Moved((int I, int J, int K) v, (int I, int J, int K) step) => (v.I + step.I, v.J + step.J, v.K + step.K);
}

/// <summary>The voxels of a head's grid of which the file says something: the margin beyond a touched face is none of them.</summary>
internal sealed class KnownBox
{
    private readonly (int Low, int High)[] _axes;

    public KnownBox(VoxelGrid grid, IReadOnlyList<TouchedFace> touched)
    {
        _axes = [(0, grid.Nx - 1), (0, grid.Ny - 1), (0, grid.Nz - 1)];
        foreach (TouchedFace face in touched)
        {
            (int low, int high) = _axes[face.Axis];
            _axes[face.Axis] = face.AtEnd ? (low, high - HeadCrop.Margin) : (low + HeadCrop.Margin, high);
        }
    }

    public bool Holds((int I, int J, int K) v) =>
        v.I >= _axes[0].Low && v.I <= _axes[0].High && v.J >= _axes[1].Low && v.J <= _axes[1].High && v.K >= _axes[2].Low && v.K <= _axes[2].High;
}
