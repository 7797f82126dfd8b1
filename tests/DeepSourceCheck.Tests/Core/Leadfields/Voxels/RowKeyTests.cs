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

    /// <summary>
    /// A head of 2 x 2 x 2 voxels, one node moved, one tensor, two electrodes, a magnetometer and a gradiometer. The key was hashed by a separate script from the numbers below, 32-bit
    /// integers and doubles, little-endian, in the order that <see cref="RowKey"/> states; for versions 1 and 3 the same script gives 8e02f378... and 46282a13...
    /// </summary>
    [Fact]
    public void Key_OfASmallHead_IsTheOneOnRecord()
    {
        VoxelGrid grid = new(2, 2, 2, new(new(0.5, 0, 0), new(0, 0.25, 0), new(0, 0, 0.125), new(1, 2, 3)));
        TissueVolume volume = new(grid, [1, 1, 1, 1, 1, 1, 1, 2], [new(0, "air", TissueKind.Air, 0), new(1, "grey", TissueKind.Grey, 0.5), new(2, "csf", TissueKind.Csf, 2)]);
        HexMesh plain = HexMesh.Plain(volume);
        var shifts = new Vec3[plain.Nodes.Count];
        shifts[13] = new(0.0625, 0, 0);
        HexMesh mesh = plain.Adapted(shifts);
        ConductivityTensors tensors = new([1UL << 3], [0.5f, 0.25f, 1, 0, 0, 2]);
        Electrode[] electrodes = [new("Cz", new(1, 0, 0), true, 0), new("Fz", new(0, 1, 0), true, 0)];
        MegChannel[] channels =
        [
            new("M1", CoilKind.Magnetometer, [new(new(0, 0, 4), new(0, 0, 1), 1)]),
            new("M2", CoilKind.AxialGradiometer, [new(new(0, 4, 0), new(0, 1, 0), 1), new(new(0, 5, 0), new(0, 1, 0), -1)]),
        ];
        string key = RowKey.Of(mesh, tensors, electrodes, channels, KeptNodes.All(new(mesh)), "tolerance 1e-6");
        Assert.True(key == "83f4eff1bf039b3bd0681f10774429da2ac4a927e557d0a0654d01296738e6dc" && RowKey.FormatVersion == 2,
            $"The same inputs now have the key {key}, version {RowKey.FormatVersion}. {WhatToDo}");
    }

    /// <summary>Rows may differ by what the solver leaves, some 1e-6 of the largest, and by the width of registers; a change of meaning is larger.</summary>
    private const double SameMeaning = 1e-4;

    private const string WhatToDo = "If keys, loads, discretisation or solver are meant to differ: raise RowKey.FormatVersion, so that no cache hands out rows of the old meaning, and record the new figures here.";

    /// <summary>Rows of one small head, solved for as a run does: sums over nodes of weighted distances from the row's mean, each electrode [V/A] and channel [T/A, T/m/A]. A record, no check of correctness.</summary>
    [Theory]
    [InlineData(false, 363.0585, 492.5746, 2876.314, 1.568849e-5, 8.099748e-6, 3.093173e-4)]
    [InlineData(true, 353.8144, 486.4661, 2701.902, 1.562065e-5, 8.091898e-6, 3.093691e-4)]
    public void Rows_OfASmallHead_AreThoseOnRecordForThisVersion(bool tensors, params double[] recorded)
    {
        HexMesh mesh = AdaptedNodes.Adapt(HexMesh.Plain(Volume));
        Electrode[] electrodes = VoxelHeads.Electrodes(Volume, 3);
        MegChannel[] channels = VoxelHeads.Channels(Volume, 3);
        ConductivityTensors? white = tensors ? VoxelHeads.WhiteTensors(Volume) : null;
        TransferRows rows = new(KeptNodes.All(new(mesh)), electrodes.Length, channels.Length);
        new VoxelSolver(mesh, white).Solve(new SensorLoads(new(mesh, electrodes), new(mesh, channels, white)), rows.Take, 1);
        double[] found = [.. Enumerable.Range(0, 6).Select(sensor => Pattern(rows, sensor))];
        string now = string.Join(", ", found.Select(f => f.ToString("R", System.Globalization.CultureInfo.InvariantCulture)));
        Assert.True(RowKey.FormatVersion == 2 && found.Zip(recorded).All(p => Math.Abs(p.First - p.Second) <= SameMeaning * Math.Abs(p.Second)), $"The rows are now {now}, version {RowKey.FormatVersion}. {WhatToDo}");
    }

    private static double Pattern(TransferRows rows, int sensor)
    {
        int count = rows.Kept.Count;
        double[] row = [.. Enumerable.Range(0, count).Select(n => (double)rows.Values[n * rows.Stride + sensor])];
        double mean = row.Average();
        return row.Select((value, n) => (value - mean) * (1 + n % 7) * Math.Sign(value - mean)).Sum();
    }
}
