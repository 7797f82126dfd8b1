using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Sensors;

public class DerivationTests
{
    private static readonly IReadOnlyList<string> Names = ElectrodeLayout.Names("ten-ten-64");

    private static Electrode[] Electrodes(params IEnumerable<string> joined) => ElectrodeLayout.OnSphere("ten-ten-64", TestHeads.Adult, joined);

    private static double Weight(double[] weights, Electrode[] electrodes, string name) => weights[Array.FindIndex(electrodes, e => e.Name == name)];

    [Fact]
    public void Mastoids_AreTheMeanOfM1AndM2_AndJoin()
    {
        Derivation d = Derivation.Parse("Cz-mastoids", [.. Names]);
        Assert.Equal(["M1", "M2"], d.Joined);
        Electrode[] electrodes = Electrodes(d.Joined);
        double[] w = d.Weights(electrodes);
        Assert.Equal(1.0, Weight(w, electrodes, "Cz"));
        Assert.Equal(-0.5, Weight(w, electrodes, "M1"));
        Assert.Equal(-0.5, Weight(w, electrodes, "M2"));
        Assert.Equal(3, w.Count(x => x != 0));
    }

    [Fact]
    public void Average_IsTheMeanOfElectrodesInUse_WithoutJoinedMastoids()
    {
        Derivation d = Derivation.Parse("Cz-average", [.. Names]);
        Electrode[] electrodes = Electrodes("M1", "M2");
        double[] w = d.Weights(electrodes);
        Assert.Equal(0.0, Weight(w, electrodes, "M1"));
        RelativeAssert.Equal(1 - 1 / 64.0, Weight(w, electrodes, "Cz"), 1e-15);
        RelativeAssert.Equal(-1 / 64.0, Weight(w, electrodes, "Oz"), 1e-15);
    }

    [Theory]
    [InlineData("Cz-M1")]
    [InlineData("Cz-mastoids")]
    [InlineData("Fz-average")]
    [InlineData("average-mastoids")]
    [InlineData("FFC1h-Oz")]
    public void Weights_SumToZero(string text)
    {
        Derivation d = Derivation.Parse(text, [.. Names]);
        Assert.InRange(Math.Abs(d.Weights(Electrodes(d.Joined)).Sum()), 0, 1e-14);
    }

    [Fact]
    public void NamesWithHyphens_AreRead()
    {
        Derivation d = Derivation.Parse("E-1-E-2", ["E-1", "E-2"], sitesMayJoin: false);
        Assert.Equal(("E-1", "E-2"), (d.Plus, d.Minus));
    }

    [Fact]
    public void AmbiguousHyphens_AreRefused()
    {
        InputException error = Assert.Throws<InputException>(() => Derivation.Parse("A-B-C", ["A", "A-B", "B-C", "C"], sitesMayJoin: false));
        Assert.Contains("'A' against 'B-C' or 'A-B' against 'C'", error.Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("Cz", "one side only")]
    [InlineData("Cz-Cz", "itself")]
    [InlineData("Cz-", "lacks a side")]
    [InlineData("Cz-masoids", "nearest: mastoids")]
    [InlineData("Fpzz-mastoids", "nearest: Fpz")]
    [InlineData("Cz-A1", "mastoid M1")]
    public void Malformed_IsRefusedWithWhatToDo(string text, string part)
    {
        InputException error = Assert.Throws<InputException>(() => Derivation.Parse(text, [.. Names]));
        Assert.Contains(part, error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void TableOfPositions_LetsNoSiteJoin()
    {
        Assert.Contains("M1 and M2", Assert.Throws<InputException>(
            () => Derivation.Parse("Cz-mastoids", ["Cz", "Pz"], sitesMayJoin: false)).Message, StringComparison.Ordinal);
        Assert.Empty(Derivation.Parse("Cz-mastoids", ["Cz", "M1", "M2"], sitesMayJoin: false).Joined);
    }

    [Fact]
    public void Reference_OfElectrodes_IsTheirMean()
    {
        ReferenceChoice reference = new(ReferenceKind.Electrodes, ["M1", "M2"]);
        Assert.Equal(["M1", "M2"], ReferenceWeights.Joined(reference, [.. Names]));
        Electrode[] electrodes = Electrodes("M1", "M2");
        double[] w = ReferenceWeights.Of(reference, electrodes);
        Assert.Equal(0.5, Weight(w, electrodes, "M1"));
        Assert.Equal(1.0, w.Sum());
    }

    [Fact]
    public void Reference_AverageAndNone()
    {
        Electrode[] electrodes = Electrodes("M1");
        double[] w = ReferenceWeights.Of(new(ReferenceKind.Average, []), electrodes);
        Assert.Equal(0.0, Weight(w, electrodes, "M1"));
        RelativeAssert.Equal(1.0, w.Sum(), 1e-14);
        Assert.All(ReferenceWeights.Of(new(ReferenceKind.None, []), electrodes), x => Assert.Equal(0.0, x));
    }

    [Fact]
    public void Reference_ToAnUnknownElectrode_IsRefusedWithTheNearest()
    {
        InputException error = Assert.Throws<InputException>(() => ReferenceWeights.Joined(new(ReferenceKind.Electrodes, ["M3x"]), [.. Names]));
        Assert.Equal("sensors.eeg.reference", error.Problems[0].Key);
        Assert.Contains("M3x", error.Message, StringComparison.Ordinal);
    }
}
