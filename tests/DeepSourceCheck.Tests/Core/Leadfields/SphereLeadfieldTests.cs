using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Spheres;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Tests.Core.Leadfields;

/// <summary>What the source of sphere leadfields admits and refuses.</summary>
public class SphereLeadfieldTests
{
    private static readonly LayeredSphere Head = SphereLeadfields.Adult;

    private static MegChannel Channel(string name, params double[] distances) =>
        new(name, CoilKind.Magnetometer, [.. distances.Select(d => new CoilPoint(Head.Centre + new Vec3(0, 0, d), new(0, 0, 1), 1))]);

    [Fact]
    public void CheckCoils_NamesEveryChannelInsideWithDistanceAndRadius()
    {
        MegChannel[] channels = [Channel("far", 0.12, 0.17), Channel("sunk", 0.15, 0.0905), Channel("touching", 0.092), Channel("lost", double.NaN)];
        InputException error = Assert.Throws<InputException>(() => SphereLeadfield.CheckCoils(Head, channels, "coils.tsv", "sensors.meg.coils"));
        Assert.Equal(3, error.Problems.Count);
        string sunk = error.Problems[0].ToString();
        Assert.StartsWith("coils.tsv: sensors.meg.coils: ", sunk, StringComparison.Ordinal);
        Assert.Contains("sunk", sunk, StringComparison.Ordinal);
        Assert.Contains("90.5 mm", sunk, StringComparison.Ordinal);
        Assert.Contains("92 mm", sunk, StringComparison.Ordinal);
        Assert.Contains("touching", error.Problems[1].Message, StringComparison.Ordinal);
        Assert.Contains("lost", error.Problems[2].Message, StringComparison.Ordinal);
    }

    [Fact]
    public void CheckCoils_OutsideTheSphere_IsSilent() => SphereLeadfield.CheckCoils(Head, [Channel("far", 0.0921, 0.3)]);

    [Fact]
    public void Constructor_RefusesCoilsInTheHeadAndChannelsWithoutPoints()
    {
        Assert.Throws<InputException>(() => new SphereLeadfield(Head, [], [Channel("sunk", 0.05)]));
        Assert.Throws<InputException>(() => new SphereLeadfield(Head, [], [Channel("empty")]));
    }

    [Fact]
    public void Constructor_RefusesAnElectrodeAtTheCentre()
    {
        ArgumentException error = Assert.Throws<ArgumentException>(() => new SphereLeadfield(Head, [new("Cz", Head.Centre, true, 0)], []));
        Assert.Contains("Cz", error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Source_WithOneModality_LeavesTheOtherEmpty()
    {
        SphereLeadfield eeg = new(Head, SphereLeadfields.Electrodes(Head, 5), []), meg = new(Head, [], SphereLeadfields.Coils(Head, 6));
        Assert.Equal((5, 0, 0, 6), (eeg.EegRows, eeg.MegRows, meg.EegRows, meg.MegRows));
    }

    [Fact]
    public void Fill_OfABlockOfOtherShape_IsRefused()
    {
        SphereLeadfield source = new(Head, SphereLeadfields.Electrodes(Head, 5), []);
        LeadfieldBlock block = new(4, 0);
        block.Load([Head.Centre], default);
        Assert.Throws<ArgumentException>(() => source.Fill(block));
    }

    [Theory]
    [InlineData(1)]
    [InlineData(3)]
    [InlineData(4)]
    [InlineData(5)]
    [InlineData(9)]
    public void Fill_WithAnyNumberOfElectrodes_GivesTheSameRows(int count)
    {
        // Four electrodes are in flight at once: remainders must not matter.
        Electrode[] all = SphereLeadfields.Electrodes(Head, 12);
        Vec3 position = Head.Centre + new Vec3(0.02, 0.01, 0.04);
        double[] expected = SphereLeadfields.Eeg(Head, [position], all)[0], actual = SphereLeadfields.Eeg(Head, [position], all[..count])[0];
        Assert.Equal(expected[..(3 * count)], actual);
    }
}
