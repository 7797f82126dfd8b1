using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Leadfields.Voxels;
using DeepSourceCheck.Core.Sensors;

namespace DeepSourceCheck.Tests.Core.Leadfields.Voxels;

/// <summary>The key changes with whatever rows depend on, and with nothing else.</summary>
public class RowKeyTests
{
    private static readonly TissueVolume Volume = VoxelHeads.Shells(VoxelHeads.Cubic);

    private static string Key(
        TissueVolume? volume = null, HexMesh? mesh = null, ConductivityTensors? tensors = null, Electrode[]? electrodes = null, MegChannel[]? channels = null, Func<HexMesh, KeptNodes>? kept = null, string settings = "tolerance 1e-6")
    {
        mesh ??= HexMesh.Plain(volume ?? Volume);
        return RowKey.Of(mesh, tensors, electrodes ?? VoxelHeads.Electrodes(Volume, 5), channels ?? VoxelHeads.Channels(Volume, 4), kept?.Invoke(mesh) ?? KeptNodes.All(new(mesh)), settings);
    }

    [Fact]
    public void Key_OfEverythingThatRowsDependOn_IsAnother()
    {
        Affine moved = VoxelHeads.Cubic with { Offset = new(0, 0, 1e-6) };
        byte[] cells = Volume.Cells.ToArray();
        cells[Array.IndexOf(cells, (byte)1)] = 2;
        Electrode[] electrodes = VoxelHeads.Electrodes(Volume, 5);
        MegChannel[] channels = VoxelHeads.Channels(Volume, 4);
        ConductivityTensors tensors = VoxelHeads.WhiteTensors(Volume);
        ulong[] has = new ulong[(Volume.Grid.Count + 63) / 64];
        int white = Array.IndexOf(Volume.Cells.ToArray(), (byte)5);
        has[white >> 6] |= 1UL << white;
        string[] keys =
        [
            Key(),
            Key(VoxelHeads.Shells(moved)),
            Key(new TissueVolume(Volume.Grid, cells, Volume.Tissues)),
            Key(VoxelHeads.Shells(VoxelHeads.Cubic, tissues: VoxelHeads.Tissues(1.0001))),
            Key(mesh: VoxelHeads.Shifted(Volume)),
            Key(tensors: tensors),
            Key(tensors: new(has, [0.1f, 0, 0.2f, 0, 0, 0.3f])),
            Key(tensors: new(has, [0.1f, 0, 0.2f, 0, 0, 0.4f])),
            Key(electrodes: [.. electrodes[..4], electrodes[4] with { Position = electrodes[4].Position + new Vec3(1e-6, 0, 0) }]),
            Key(electrodes: electrodes[..4]),
            Key(channels: channels[..3]),
            Key(channels: [.. channels[..3], channels[3] with { Points = [channels[3].Points[0] with { Share = 0.5 }] }]),
            Key(channels: [.. channels[..3], channels[3] with { Points = [channels[3].Points[0] with { Axis = new(0, 0, 1) }] }]),
            Key(kept: mesh => KeptNodes.NeededBy(new MonopoleLoad(new(mesh)), VoxelHeads.Dipoles(Volume, 2))),
            Key(settings: "tolerance 1e-5"),
        ];
        Assert.Equal(keys.Length, keys.Distinct().Count());
        Assert.All(keys, key => Assert.Matches("^[0-9a-f]{64}$", key));
    }

    [Fact]
    public void Key_WithOtherNames_IsTheSame()
    {
        Tissue[] renamed = [.. VoxelHeads.Tissues().Select(t => t with { Name = t.Name + "!", Label = t.Label * 10 })];
        Electrode[] electrodes = [.. VoxelHeads.Electrodes(Volume, 5).Select(e => e with { Name = "x" + e.Name, InAverage = false })];
        MegChannel[] channels = [.. VoxelHeads.Channels(Volume, 4).Select(c => c with { Name = "x" + c.Name })];
        Assert.Equal(Key(), Key(VoxelHeads.Shells(VoxelHeads.Cubic, tissues: renamed), electrodes: electrodes, channels: channels));
    }
}
