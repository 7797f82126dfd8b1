using DeepSourceCheck.Report.Answers;

namespace DeepSourceCheck.Tests.Report;

/// <summary>Warnings as people read them.</summary>
public class WarningTextTests
{
    [Fact]
    public void Grouped_SharedWarnings_NameTheirRegionsOnceInOrder() =>
        Assert.Equal(
            ["pons, medulla: lies low: read with care", "pons: lost a third", "the room is noisy"],
            WarningText.Grouped(["pons: lies low: read with care", "pons: lost a third", "medulla: lies low: read with care", "the room is noisy", "pons: lost a third"]));

    [Fact]
    public void InRow_DropsTheNameThatTheRowHasAndMakesSentences() =>
        Assert.Equal("Lies low: read with care. Lost a third. Other: stays.", WarningText.InRow("pons", ["pons: lies low: read with care", "pons: lost a third", "other: stays"]));
}
