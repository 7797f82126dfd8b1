using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Voxels;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Tests.References;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Leadfields.Voxels;

/// <summary>Leadfields from rows against direct solves, and the symmetries that they must have. Small heads of 8 mm, solved by the slow twin.</summary>
public class VoxelLeadfieldTests
{
    /// <summary>The goal for rows against direct solves: single precision of rows and loads.</summary>
    private const double RowsAgainstDirect = 1e-5;

    /// <summary>Fields of two heads that differ by rounding only, rows in single precision.</summary>
    private const double Rounding = 1e-5;

    private const int SomeElectrodes = 9, SomeChannels = 9;

    private static VoxelLeadfield Leadfield(HexMesh mesh, DipoleLoadKind kind, ConductivityTensors? tensors = null)
    {
        Electrode[] electrodes = VoxelHeads.Electrodes(mesh.Volume, SomeElectrodes);
        MegChannel[] channels = VoxelHeads.Channels(mesh.Volume, SomeChannels);
        return new(VoxelHeads.Rows(mesh, tensors, electrodes, channels), DipoleLoad.Of(kind, new(mesh)), channels);
    }

    [Theory]
    [InlineData(DipoleLoadKind.Monopoles, false, false)]
    [InlineData(DipoleLoadKind.Monopoles, true, true)]
    [InlineData(DipoleLoadKind.ElementGradient, true, false)]
    [InlineData(DipoleLoadKind.ElementGradient, false, true)]
    public void Leadfield_IsWhatADirectSolveWithTheDipoleGives(DipoleLoadKind kind, bool shifted, bool withTensors)
    {
        TissueVolume volume = VoxelHeads.Shells(VoxelHeads.Oblique);
        HexMesh mesh = shifted ? VoxelHeads.Shifted(volume) : HexMesh.Plain(volume);
        ConductivityTensors? tensors = withTensors ? VoxelHeads.WhiteTensors(volume) : null;
        Electrode[] electrodes = VoxelHeads.Electrodes(volume, SomeElectrodes);
        MegChannel[] channels = VoxelHeads.Channels(volume, SomeChannels);
        DipoleLoad load = DipoleLoad.Of(kind, new(mesh));
        VoxelLeadfield leadfield = new(VoxelHeads.Rows(mesh, tensors, electrodes, channels), load, channels);
        Vec3[] dipoles = VoxelHeads.Dipoles(volume, 3);
        (double[][] eeg, double[][] meg) = VoxelHeads.Compute(leadfield, dipoles);

        PlainHexSystem system = new(mesh, tensors);
        ElectrodeLoad contacts = new(mesh, electrodes);
        SensorLoads loads = new(contacts, new(mesh, channels, tensors));
        var blocks = new float[2][];
        for (int b = 0; b < blocks.Length; b++)
        {
            blocks[b] = new float[16 * mesh.Nodes.Count];
            loads.Fill(b, blocks[b]);
        }

        // The coils' own loads: how they compare with the volume integral is the matter of SensorLoadTests.
        double[][] coils = [.. Enumerable.Range(SomeElectrodes, SomeChannels).Select(s => VoxelHeads.Lane(blocks[s / 16], s % 16).Select(v => v * Si.Mu0Over4Pi).ToArray())];
        var nodes = new int[DipoleLoad.MostNodes];
        var weights = new Vec3[DipoleLoad.MostNodes];
        for (int d = 0; d < dipoles.Length; d++)
        {
            int count = load.Place(dipoles[d], nodes, weights, out _);
            double[] expectedEeg = new double[3 * SomeElectrodes], expectedMeg = new double[3 * SomeChannels];
            for (int axis = 0; axis < 3; axis++)
            {
                var right = new double[mesh.Nodes.Count];
                for (int n = 0; n < count; n++)
                {
                    right[nodes[n]] += weights[n][axis];
                }

                double[] potentials = system.Solve(right);
                Vec3 moment = new(axis == 0 ? 1 : 0, axis == 1 ? 1 : 0, axis == 2 ? 1 : 0);
                for (int e = 0; e < SomeElectrodes; e++)
                {
                    int[] at = contacts.NodesOf(e).ToArray();
                    expectedEeg[3 * e + axis] = at.Zip(contacts.WeightsOf(e).ToArray(), (n, w) => w * potentials[n]).Sum();
                }

                for (int c = 0; c < SomeChannels; c++)
                {
                    expectedMeg[3 * c + axis] = PlainHexSystem.Dot(coils[c], potentials) + PlainHexSystem.Primary(channels[c], dipoles[d], moment);
                }
            }

            // EEG against its average: the direct solve has its mean over all nodes at zero, the rows over the surface. MEG by kind: T and T/m do not mix.
            RelativeAssert.Close(SphereLeadfields.AverageReferenced(expectedEeg), SphereLeadfields.AverageReferenced(eeg[d]), RowsAgainstDirect, $"EEG of dipole {d}");
            foreach (CoilKind coil in Enum.GetValues<CoilKind>())
            {
                int[] of = [.. Enumerable.Range(0, 3 * SomeChannels).Where(k => channels[k / 3].Kind == coil)];
                RelativeAssert.Close([.. of.Select(k => expectedMeg[k])], [.. of.Select(k => meg[d][k])], RowsAgainstDirect, $"MEG {coil} of dipole {d}");
            }
        }
    }

    [Fact]
    public void Leadfield_OfTwoElectrodes_IsTheFieldThatCurrentBetweenThemDrives()
    {
        // Reciprocity (Helmholtz 1853): V1 - V2 of a dipole Q = -Q . E for one ampere into 1 and out of 2, E = -grad u taken by central differences in the element.
        TissueVolume volume = VoxelHeads.Shells(VoxelHeads.Cubic);
        HexMesh mesh = HexMesh.Plain(volume);
        Electrode[] electrodes = VoxelHeads.Electrodes(volume, SomeElectrodes);
        double[][] eeg = VoxelHeads.Compute(Leadfield(mesh, DipoleLoadKind.ElementGradient), VoxelHeads.Dipoles(volume, 4)).Eeg;
        ElectrodeLoad contacts = new(mesh, electrodes);
        var current = new double[mesh.Nodes.Count];
        for (int c = 0; c < 8; c++)
        {
            current[contacts.NodesOf(2)[c]] += contacts.WeightsOf(2)[c];
            current[contacts.NodesOf(5)[c]] -= contacts.WeightsOf(5)[c];
        }

        double[] potentials = new PlainHexSystem(mesh).Solve(current);
        var nodes = new int[8];
        var places = new Vec3[8];
        Vec3[] dipoles = VoxelHeads.Dipoles(volume, 4);
        for (int d = 0; d < dipoles.Length; d++)
        {
            (int i, int j, int k) = volume.Grid.Voxel(volume.Grid.IndexAt(dipoles[d]));
            TrilinearHexahedron.Load(mesh, i, j, k, nodes, places);
            double[] slope = [.. Enumerable.Range(0, 3).Select(axis => (At(axis, 1e-5) - At(axis, -1e-5)) / 2e-5)];
            double[] difference = [.. Enumerable.Range(0, 3).Select(axis => eeg[d][3 * 2 + axis] - eeg[d][3 * 5 + axis])];
            RelativeAssert.Close(slope, difference, RowsAgainstDirect);

            double At(int axis, double step)
            {
                Vec3 point = dipoles[d] + step * new Vec3(axis == 0 ? 1 : 0, axis == 1 ? 1 : 0, axis == 2 ? 1 : 0);
                Vec3 natural = (point - places[0]) / 0.008;
                var shape = new double[8];
                TrilinearHexahedron.Shape(natural, shape);
                return nodes.Zip(shape, (n, s) => s * potentials[n]).Sum();
            }
        }
    }

    [Theory]
    [InlineData(DipoleLoadKind.Monopoles)]
    [InlineData(DipoleLoadKind.ElementGradient)]
    public void Leadfield_WhenAllConductivitiesDouble_HalvesEegAndLeavesMeg(DipoleLoadKind kind)
    {
        Vec3[] dipoles = VoxelHeads.Dipoles(VoxelHeads.Shells(VoxelHeads.Cubic), 5);
        (double[][] eeg, double[][] meg) = VoxelHeads.Compute(Leadfield(HexMesh.Plain(VoxelHeads.Shells(VoxelHeads.Cubic)), kind), dipoles);
        (double[][] half, double[][] same) = VoxelHeads.Compute(Leadfield(HexMesh.Plain(VoxelHeads.Shells(VoxelHeads.Cubic, tissues: VoxelHeads.Tissues(2))), kind), dipoles);
        for (int d = 0; d < dipoles.Length; d++)
        {
            RelativeAssert.Close([.. eeg[d].Select(v => v / 2)], half[d], Rounding);
            RelativeAssert.Close(meg[d], same[d], Rounding);
        }
    }

    [Fact]
    public void Leadfield_WhenAllTissuesConductAlike_IsThatOfOneTissue()
    {
        Tissue[] alike = [.. VoxelHeads.Tissues().Select(t => t.Label == 0 ? t : t with { Conductivity = 0.33 })];
        TissueVolume shells = VoxelHeads.Shells(VoxelHeads.Oblique, tissues: alike);
        TissueVolume one = new(shells.Grid, [.. shells.Cells.ToArray().Select(c => (byte)Math.Min((int)c, 1))], [alike[0], alike[4]]);

        // The monopoles know the tissues, the element's gradient does not.
        Vec3[] dipoles = VoxelHeads.Dipoles(shells, 5);
        (double[][] eeg, double[][] meg) = VoxelHeads.Compute(Leadfield(HexMesh.Plain(shells), DipoleLoadKind.ElementGradient), dipoles);
        (double[][] eegOne, double[][] megOne) = VoxelHeads.Compute(Leadfield(HexMesh.Plain(one), DipoleLoadKind.ElementGradient), dipoles);
        for (int d = 0; d < dipoles.Length; d++)
        {
            RelativeAssert.Close(eegOne[d], eeg[d], Rounding);
            RelativeAssert.Close(megOne[d], meg[d], Rounding);
        }
    }

    [Theory]
    [InlineData(DipoleLoadKind.Monopoles)]
    [InlineData(DipoleLoadKind.ElementGradient)]
    public void Leadfield_WhenTheVolumeIsStoredTurnedByNinetyDegrees_StaysTheSame(DipoleLoadKind kind)
    {
        // The same head in the same world, its voxels stored along other axes: (i, j, k) becomes (j, n - 1 - i, k).
        TissueVolume volume = VoxelHeads.Shells(VoxelHeads.Oblique);
        VoxelGrid grid = volume.Grid;
        Affine a = grid.ToWorld;
        Vec3 along = a.Column(1), down = -a.Column(0), up = a.Column(2), offset = a.Apply(new(grid.Nx - 1, 0, 0));
        VoxelGrid turned = new(grid.Ny, grid.Nx, grid.Nz, new(new(along.X, down.X, up.X), new(along.Y, down.Y, up.Y), new(along.Z, down.Z, up.Z), offset));
        var cells = new byte[grid.Count];
        for (int cell = 0; cell < cells.Length; cell++)
        {
            (int i, int j, int k) = grid.Voxel(cell);
            cells[turned.Index(j, grid.Nx - 1 - i, k)] = volume.Cells[cell];
        }

        TissueVolume other = new(turned, cells, volume.Tissues);
        Vec3[] dipoles = VoxelHeads.Dipoles(volume, 5);
        (double[][] eeg, double[][] meg) = VoxelHeads.Compute(Leadfield(HexMesh.Plain(volume), kind), dipoles);
        (double[][] eegTurned, double[][] megTurned) = VoxelHeads.Compute(Leadfield(HexMesh.Plain(other), kind), dipoles);
        for (int d = 0; d < dipoles.Length; d++)
        {
            RelativeAssert.Close(eeg[d], eegTurned[d], Rounding);
            RelativeAssert.Close(meg[d], megTurned[d], Rounding);
        }
    }

    [Theory]
    [InlineData(1, 0)]
    [InlineData(0, 1)]
    [InlineData(7, 9)]
    [InlineData(16, 0)]
    [InlineData(20, 13)]
    [InlineData(31, 18)]
    public void Fill_OfAnyNumberOfSensors_IsThePlainSumOverNodes(int electrodes, int coils)
    {
        // Rows of a fixed pattern stand in for a solution: the sums are what is looked at.
        TissueVolume volume = VoxelHeads.Shells(VoxelHeads.Cubic);
        HexMesh mesh = HexMesh.Plain(volume);
        TransferRows rows = new(KeptNodes.All(new(mesh)), electrodes, coils);
        var block = new float[mesh.Nodes.Count * 16];
        for (int b = 0; b * 16 < electrodes + coils; b++)
        {
            for (int n = 0; n < block.Length; n++)
            {
                block[n] = (float)Math.Sin(0.37 * n + b);
            }

            rows.Take(b, block);
        }

        MegChannel[] channels = VoxelHeads.Channels(volume, coils);
        MonopoleLoad load = new(new(mesh));
        VoxelLeadfield leadfield = new(rows, load, channels);
        Vec3[] dipoles = VoxelHeads.Dipoles(volume, 11);
        (double[][] eeg, double[][] meg) = VoxelHeads.Compute(leadfield, dipoles);
        var nodes = new int[DipoleLoad.MostNodes];
        var weights = new Vec3[DipoleLoad.MostNodes];
        for (int d = 0; d < dipoles.Length; d++)
        {
            int count = load.Place(dipoles[d], nodes, weights, out _);
            for (int sensor = 0; sensor < electrodes + coils; sensor++)
            {
                Vec3 sum = Vec3.Zero, sizes = Vec3.Zero;
                for (int n = 0; n < count; n++)
                {
                    double row = rows.Values[rows.Kept.RowOf(nodes[n]) * rows.Stride + sensor];
                    sum += row * weights[n];
                    sizes += Math.Abs(row) * new Vec3(Math.Abs(weights[n].X), Math.Abs(weights[n].Y), Math.Abs(weights[n].Z));
                }

                for (int axis = 0; axis < 3; axis++)
                {
                    bool isEeg = sensor < electrodes;
                    double primary = isEeg ? 0 : PlainHexSystem.Primary(channels[sensor - electrodes], dipoles[d], new(axis == 0 ? 1 : 0, axis == 1 ? 1 : 0, axis == 2 ? 1 : 0));
                    double actual = isEeg ? eeg[d][3 * sensor + axis] : meg[d][3 * (sensor - electrodes) + axis];
                    Assert.InRange(Math.Abs(sum[axis] + primary - actual), 0, 1e-6 * sizes[axis]);      // single precision over 27 terms
                }
            }
        }
    }

    [Fact]
    public void Fill_TakesNoMemory()
    {
        TissueVolume volume = VoxelHeads.Shells(VoxelHeads.Oblique);
        HexMesh mesh = VoxelHeads.Shifted(volume);
        MegChannel[] channels = VoxelHeads.Channels(volume, 20);
        foreach (DipoleLoadKind kind in Enum.GetValues<DipoleLoadKind>())
        {
            VoxelLeadfield leadfield = new(new(KeptNodes.All(new(mesh)), 30, 20), DipoleLoad.Of(kind, new(mesh)), channels);
            LeadfieldBlock block = new(30, 20);
            block.Load(VoxelHeads.Dipoles(volume, 8), default);
            leadfield.Fill(block);
            leadfield.Fill(block);
            long before = GC.GetAllocatedBytesForCurrentThread();
            for (int n = 0; n < 20; n++)
            {
                leadfield.Fill(block);
            }

            Assert.Equal(0, GC.GetAllocatedBytesForCurrentThread() - before);
        }
    }

    [Fact]
    public void Fill_LanesThatAreNotInUse_RepeatTheLastDipole()
    {
        HexMesh mesh = HexMesh.Plain(VoxelHeads.Shells(VoxelHeads.Cubic));
        VoxelLeadfield leadfield = new(new(KeptNodes.All(new(mesh)), 2, 3), new MonopoleLoad(new(mesh)), VoxelHeads.Channels(mesh.Volume, 3));
        LeadfieldBlock block = new(2, 3);
        Array.Fill(block.Meg, double.NaN);
        block.Load(VoxelHeads.Dipoles(mesh.Volume, 3), default);
        leadfield.Fill(block);
        Assert.All(Enumerable.Range(3, 5), lane => Assert.Equal(SphereLeadfields.Lane(block.Meg, 2), SphereLeadfields.Lane(block.Meg, lane)));
        Assert.DoesNotContain(block.Meg, double.IsNaN);
    }

    // Beside grey shells there is a sheet of one voxel, so that every fallback but the last is met; the plain twin places each load.
    [Theory]
    [InlineData(false)]
    [InlineData(true)]
    public void Supports_CountWhatCarriesEachDipole_AsItsLoadSays(bool shifted)
    {
        TissueVolume shells = VoxelHeads.Shells(VoxelHeads.Cubic, 19, 18, 17);
        byte[] cells = [.. Enumerable.Range(0, shells.Grid.Count).Select(c => shells.Grid.Voxel(c) is { K: 8 or 10 } v && v is { I: > 4 and < 14, J: > 4 and < 13 } ? (byte)3 : shells.Cells[c])];
        TissueVolume volume = new(shells.Grid, cells, shells.Tissues);
        MonopoleLoad load = new(new(shifted ? VoxelHeads.Shifted(volume) : HexMesh.Plain(volume)));
        Vec3[] dipoles = [.. VoxelHeads.Dipoles(volume, 3000)];
        int[] plain = new int[4];
        foreach (Vec3 d in dipoles)
        {
            load.Place(d, new int[DipoleLoad.MostNodes], new Vec3[DipoleLoad.MostNodes], out DipoleSupport support);
            Assert.Equal(support, load.SupportAt(d));
            plain[(int)support]++;
        }

        Assert.All(plain[..3], n => Assert.True(n > 10, $"only {n} dipoles of a kind: the check is blind"));
        VoxelLeadfield leadfield = new(new(KeptNodes.All(new(HexMesh.Plain(volume))), 2, 3), load, VoxelHeads.Channels(volume, 3));
        SupportCounts? counts = leadfield.Supports(dipoles, CancellationToken.None);
        Assert.Equal(new(plain[0], plain[1], plain[2], plain[3]), counts);
        Assert.Equal(dipoles.Length, counts!.Total);
        Assert.Null(new VoxelLeadfield(new(KeptNodes.All(new(HexMesh.Plain(volume))), 2, 3), new ElementGradientLoad(load.Tissue), VoxelHeads.Channels(volume, 3)).Supports(dipoles, CancellationToken.None));
    }

    [Fact]
    public void Supports_WarnAboveATenthAlone_WithShareAndCounts()
    {
        Assert.Null(new SupportCounts(85, 5, 6, 4).Warning);
        Assert.Matches(@"^11 % .*\(7 on nodes of the tissue's border, 4 on the gradient of their voxel, of 100\)", new SupportCounts(84, 5, 7, 4).Warning);
        Assert.Equal(new(3, 5, 7, 9), new SupportCounts(1, 2, 3, 4) + new SupportCounts(2, 3, 4, 5));
    }

    [Fact]
    public void Leadfield_OfWrongShapeOrPlace_IsRefused()
    {
        HexMesh mesh = HexMesh.Plain(VoxelHeads.Shells(VoxelHeads.Cubic));
        MonopoleLoad load = new(new(mesh));
        Vec3[] dipoles = VoxelHeads.Dipoles(mesh.Volume, 40);
        dipoles = [dipoles[0], dipoles[39]];                 // at opposite ends: they share no nodes
        TransferRows rows = new(KeptNodes.NeededBy(load, [dipoles[0]]), 2, 3);
        MegChannel[] channels = VoxelHeads.Channels(mesh.Volume, 3);
        Assert.Throws<ArgumentException>(() => new VoxelLeadfield(rows, load, channels[..2]));
        VoxelLeadfield leadfield = new(rows, load, channels);
        Assert.Throws<ArgumentException>(() => leadfield.Fill(new(3, 3)));
        LeadfieldBlock block = new(2, 3);
        block.Load([dipoles[0]], default);
        leadfield.Fill(block);
        Assert.All(dipoles, d =>
        {
            load.Place(d, new int[DipoleLoad.MostNodes], new Vec3[DipoleLoad.MostNodes], out DipoleSupport support);
            Assert.Equal(support, leadfield.SupportAt(d));
        });
        block.Load([dipoles[1]], default);
        Assert.Throws<InvalidOperationException>(() => leadfield.Fill(block));
        block.Load([new(1, 0, 0)], default);
        Assert.Throws<ArgumentOutOfRangeException>(() => leadfield.Fill(block));
        Assert.Throws<ArgumentOutOfRangeException>(() => new TransferRows(rows.Kept, 0, 0));
    }
}
