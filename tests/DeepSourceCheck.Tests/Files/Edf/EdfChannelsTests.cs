using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Edf;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Files.Edf;

/// <summary>Electrodes of a study among the signals of a file.</summary>
public sealed class EdfChannelsTests : IDisposable
{
    private readonly ScratchFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    private EdfHeader Header(params string[] labels)
    {
        var file = new EdfBytes { Signals = [.. labels.Select(l => new EdfTestSignal(l, new double[100]))] };
        return EdfReader.ReadHeader(_folder.Write("r.edf", file.ToArray()), "r.edf");
    }

    private InputProblem Problem(string[] labels, string[] electrodes, string[]? stated = null, string? reference = null) =>
        Assert.Single(Assert.Throws<InputException>(() => EdfChannels.Match(Header(labels), electrodes, stated, reference)).Problems);

    [Theory]
    [InlineData("Cz", "Pz")]
    [InlineData("CZ", "pz")]
    [InlineData("EEG Cz", "EEG Pz")]
    [InlineData("eeg cz-ref", "EEG PZ-Ref")]
    [InlineData("EEG Cz-A1", "EEG Pz-A1")]
    public void Names_AreFoundByTheStatedConventions(string cz, string pz) =>
        Assert.Equal([2, 0], EdfChannels.Match(Header(pz, "ECG", cz), ["Cz", "Pz"], null, null));

    [Fact]
    public void OlderNamesOfSites_AreTheirPresentOnes() => Assert.Equal([1, 0], EdfChannels.Match(Header("EEG T5", "EEG T3"), ["T7", "P7"], null, null));

    [Fact]
    public void ReferenceElectrode_NeedsNoSignal()
    {
        Assert.Equal([0, -1], EdfChannels.Match(Header("EEG Pz"), ["Pz", "Cz"], null, "Cz"));
        Assert.Equal([0, -1], EdfChannels.Match(Header("EEG Pz-Cz"), ["Pz", "Cz"], null, null));
    }

    [Fact]
    public void StatedLabels_StandInTheOrderOfTheElectrodes()
    {
        EdfHeader header = Header("1", "2", "3");
        Assert.Equal([2, 0, -1], EdfChannels.Match(header, ["Cz", "Pz", "Oz"], ["3", "1"], "Oz"));
    }

    [Fact]
    public void MissingElectrodes_AreNamedWithTheLabelsThatThereAre()
    {
        InputProblem problem = Problem(["EEG Cz", "ECG"], ["Cz", "Pz", "M1"]);
        Assert.Contains("no signal is electrode Pz, M1; the file's labels are EEG Cz, ECG", problem.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void EarLobes_AreNoMastoids() => Assert.Contains("no signal is electrode M1", Problem(["Cz", "A1"], ["Cz", "M1"]).Message, StringComparison.Ordinal);

    [Fact]
    public void WhatContradictsItself_IsRefused()
    {
        Assert.Contains("EEG Cz and Cz both are electrode Cz", Problem(["EEG Cz", "Cz"], ["Cz"]).Message, StringComparison.Ordinal);
        Assert.Contains("different references", Problem(["Cz-A1", "Pz-A2"], ["Cz", "Pz"]).Message, StringComparison.Ordinal);
        Assert.Contains("the labels of r.edf say Cz", Problem(["Pz-Cz"], ["Cz", "Pz", "Oz"], null, "Oz").Message, StringComparison.Ordinal);
        Assert.Equal("noise.eeg_recording.reference", Problem(["Pz"], ["Pz"], null, "Nose").Key);
        Assert.Contains("names 1 labels for 2 electrodes; state one for each, in this order: Cz, Pz", Problem(["a", "b"], ["Cz", "Pz"], ["a"]).Message, StringComparison.Ordinal);
        Assert.Contains("'c' stands nowhere among the labels of r.edf, which are a, b", Problem(["a", "b"], ["Cz", "Pz"], ["a", "c"]).Message, StringComparison.Ordinal);
        Assert.Contains("names a label twice", Problem(["a", "b"], ["Cz", "Pz"], ["a", "a"]).Message, StringComparison.Ordinal);
        Assert.Contains("'a' stands 2 times", Problem(["a", "a"], ["Cz"], ["a"]).Message, StringComparison.Ordinal);
    }
}
