using System.Globalization;

using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Files.Regions;
using DeepSourceCheck.Tests.House;

namespace DeepSourceCheck.Tests.Files.Regions;

/// <summary>The measured figures that travel with the library. That the program still gives them is held by Verification.</summary>
public class RealisticHeadTableTests
{
    private const string Header = "structure\tphantom_cz_dB\tphantom_eeg_dB\tphantom_meg_dB\treal_cz_dB\treal_eeg_dB\treal_meg_dB\tweakest_over_strongest\tweakest_to_outward_deg";
    private const string Row = "pons\t1\t2\t3\t4\t5\t6\t0.1\t20";

    private static readonly RegionLibrary Library = RegionLibrary.Load();

    [Fact]
    public void EveryStructureOfTheLibrary_HasARow_AndNoOtherHas()
    {
        // Cortex is no deep region, and not the same places on spheres (a shell) and on a label volume (folded grey matter).
        string[] deep = [.. Library.Regions.Select(r => r.Structure).Distinct().Where(s => s != "cortex")];
        Assert.Equal(deep.Order(StringComparer.Ordinal), RealisticHeadTable.Load().Structures.Order(StringComparer.Ordinal));
        Assert.All(Library.Regions, r => Assert.Equal(r.Structure != "cortex", r.RealisticHead is not null));
    }

    [Fact]
    public void RightSides_CarryTheFiguresOfTheLeft_AndSaySo() => Assert.All(Library.Regions.Where(r => r.RealisticHead is not null), r =>
    {
        Assert.Equal(r.Name, r.RealisticHead!.Region);
        Assert.Equal(r.Side == "right" ? "left" : null, r.RealisticHead.MeasuredSide);
        if (r.Side == "right")
        {
            Assert.Equal(r.RealisticHead, Library.Find(r.Structure + "-left")!.RealisticHead! with { Region = r.Name, MeasuredSide = "left" });
        }
    });

    [Fact]
    public void Figures_AreThoseOfTheDevelopersNotes()
    {
        Dictionary<string, string[]> told = DeepRegions();
        RealisticHeadTable table = RealisticHeadTable.Load();
        Assert.Equal(table.Structures.Order(StringComparer.Ordinal), told.Keys.Order(StringComparer.Ordinal));
        Assert.All(table.Structures, structure =>
        {
            RealisticHeadEffect effect = table.Find(structure, structure, "midline")!;
            string[] cells = told[structure];
            Assert.Equal(Numbers(cells[5]), Three(effect.Phantom));
            Assert.Equal(Numbers(cells[6]), Three(effect.RealHead));
            Assert.Equal(Assert.Single(Numbers(cells[7])), effect.WeakestOverStrongest);
            Assert.Equal(Assert.Single(Numbers(cells[8])), effect.WeakestToOutwardDeg);
        });
    }

    // Definition of the decibel of power: 10^(-0.05) = 0.8912509..., 10^0.3 = 1.9952623..., computed apart.
    [Theory]
    [InlineData(0, 1)]
    [InlineData(10, 0.1)]
    [InlineData(-20, 100)]
    [InlineData(0.5, 0.891250938133746)]
    [InlineData(-3, 1.99526231496888)]
    public void TrialsFactor_IsTheInverseOfThePowerRatio(double change, double factor) =>
        Support.RelativeAssert.Equal(factor, HeadChange.TrialsFactor(change), 1e-14);

    [Fact]
    public void Find_OfAnotherStructure_IsNull() => Assert.Null(RealisticHeadTable.Load().Find("cortex", "cortex", "midline"));

    [Fact]
    public void Read_LeavesOutCommentsAndEmptyLines()
    {
        using StringReader text = new($"# said first\n\n{Header}\n{Row}\n# said last\n");
        Assert.Equal(new("pons", null, new(1, 2, 3), new(4, 5, 6), 0.1, 20), RealisticHeadTable.Read(text).Find("pons", "pons", "midline"));
    }

    [Theory]
    [InlineData("structure\tphantom_dB\n" + Row, "line 1: the columns must be structure phantom_cz_dB")]
    [InlineData(Header + "\npons\t1\t2", "line 2: the row has 3 cells, the header 9")]
    [InlineData(Header + "\npons\t1\t2\tmany\t4\t5\t6\t0.1\t20", "line 2: phantom_meg_dB must be a number, not 'many'")]
    [InlineData(Header + "\npons\t1\t2\tNaN\t4\t5\t6\t0.1\t20", "line 2: phantom_meg_dB must be a number, not 'NaN'")]
    [InlineData("#\n" + Header + "\n" + Row + "\n" + Row, "line 4: pons has a row already")]
    public void Read_OfAMalformedTable_NamesFileLineAndColumn(string text, string message)
    {
        using StringReader reader = new(text);
        Assert.StartsWith($"regions/realistic-head.tsv: {message}", Assert.Throws<InvalidDataException>(() => RealisticHeadTable.Read(reader)).Message, StringComparison.Ordinal);
    }

    private static double[] Three(HeadChange change) => [change.EegCzMastoids, change.EegBestChannel, change.MegBestChannel];

    // -0.0 of the notes is 0.
    private static double[] Numbers(string cell) => [.. cell.Split(", ").Select(n => double.Parse(n, NumberStyles.Float, CultureInfo.InvariantCulture) + 0.0)];

    /// <summary>Cells of the table below "Deep regions" by structure.</summary>
    private static Dictionary<string, string[]> DeepRegions()
    {
        string text = File.ReadAllText(Repository.At("DEVELOPERS.md")).ReplaceLineEndings("\n");
        int from = text.IndexOf("\n### Deep regions\n", StringComparison.Ordinal), to = text.IndexOf("\n### ", from + 1, StringComparison.Ordinal);
        string[] rows = [.. text[from..to].Split('\n').Where(l => l.StartsWith("| ", StringComparison.Ordinal))];
        Assert.StartsWith("| region | EEG tangential |", rows[0], StringComparison.Ordinal);
        return rows.Skip(1).Select(l => l.Trim('|', ' ').Split(" | ")).ToDictionary(c => c[0]);
    }
}
