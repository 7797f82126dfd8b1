using System.Text;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Tables;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Files.Tables;

public sealed class TablesTests
{
    private const string Points = "name\tx\ty\tz\na\t1\t-2\t3.5\nb\t4\t5\t6\n";
    private const string Coils = "channel\tkind\tx_mm\ty_mm\tz_mm\taxis_x\taxis_y\taxis_z\tshare\n";

    [Theory]
    [InlineData(Points)]
    [InlineData("\ufeff" + Points)]
    [InlineData("z\textra\tname\ty\tx\r\n3.5\t?\ta\t-2\t1\r\n\r\n6\t\tb\t5\t4")]
    public void Points_AreReadWhateverTheColumnOrderAndLineEnds(string text)
    {
        PointsTable table = PointsOf(text);
        Assert.Equal(["a", "b"], table.Points.Select(p => p.Name));
        Assert.Equal(new Vec3(0.001, -0.002, 0.0035), table.Points[0].Position);
        Assert.Null(table.Points[0].Direction);
        Assert.Empty(table.Warnings);
    }

    [Fact]
    public void Directions_AreOptionalPerPoint_AndKeptWhenOfUnitLength()
    {
        PointsTable table = PointsOf("name\tx\ty\tz\tdirection_x\tdirection_y\tdirection_z\na\t1\t2\t3\t0.6\t0\t0.8\nb\t1\t2\t3\tn/a\tn/a\tn/a\nc\t1\t2\t3\t0\t0\t1.0005\n");
        Assert.Equal(new Vec3(0.6, 0, 0.8), table.Points[0].Direction);
        Assert.Null(table.Points[1].Direction);
        Assert.Equal(new Vec3(0, 0, 1), table.Points[2].Direction);
        Assert.Contains("1 directions", Assert.Single(table.Warnings), StringComparison.Ordinal);
    }

    [Fact]
    public void AllProblemsOfAFile_AreReportedAtOnceWithLineAndColumn()
    {
        InputException error = Refused(() => PointsOf("name\tx\ty\tz\na\t1\tNaN\t3\n\nb\t1,5\t2\t1e400\na\t1\t2\n\t1\t2\t\na\t1e9\t0\t0\n"));
        string[] expected =
        [
            "t.tsv:2: y: 'NaN' is out of range",
            "t.tsv:4: x: '1,5' is not a number (write a decimal point",
            "t.tsv:4: z: '1e400' is out of range",
            "t.tsv:5: the row has 3 cells and the header 4",
            "t.tsv:6: name: the name is empty",
            "t.tsv:6: z: the cell is empty",
            "t.tsv:7: name: the name 'a' stands already in line 2",
            "t.tsv:7: x: '1e9' is out of range; a finite number of at most 10000 mm",
        ];
        Assert.Equal(expected.Length, error.Problems.Count);
        foreach (string start in expected)
        {
            Assert.Contains(error.Problems, p => p.ToString().StartsWith(start, StringComparison.Ordinal));
        }
    }

    [Fact]
    public void LongCellsAndManyProblems_AreCutShort()
    {
        InputException error = Refused(() => PointsOf("name\tx\ty\tz\n" + string.Concat(Enumerable.Range(0, 100).Select(n => $"p{n}\t{new string('9', 5000)}x\t1\t2\n"))));
        Assert.InRange(error.Problems.Count, 10, 50);
        Assert.Contains("further problems", error.Problems[^1].Message, StringComparison.Ordinal);
        Assert.InRange(error.Message.Length, 100, 10_000);
    }

    [Theory]
    [InlineData("name\tx\ty\na\t1\t2\n", "z: the column is missing")]
    [InlineData("name x y z\na 1 2 3\n", "separated by tabs")]
    [InlineData("name\tx\tx\ty\tz\na\t1\t1\t2\t3\n", "twice")]
    [InlineData("name\tx\ty\tz\n", "no rows")]
    [InlineData("\n \n", "no text")]
    [InlineData("name\tx\ty\tz\tdirection_x\na\t1\t2\t3\t1\n", "all three")]
    [InlineData("name\tx\ty\tz\tdirection_x\tdirection_y\tdirection_z\na\t1\t2\t3\t1\t1\t0\n", "length 1.41421")]
    [InlineData("name\tx\ty\tz\na\u0007\t1\t2\t3\n", "control character")]
    [InlineData("name\tx\ty\tz\na\t0x10\t2\t3\n", "not a number")]
    public void MalformedTable_IsRefusedWithTheReason(string text, string reason) => Assert.Contains(reason, Refused(() => PointsOf(text)).Message, StringComparison.Ordinal);

    [Fact]
    public void TextThatIsNotUtf8_IsRefusedWithItsLine()
    {
        Assert.StartsWith("t.tsv:3: the text is not UTF-8", Refused(() => PointsOf([.. Encoding.UTF8.GetBytes("name\tx\ty\tz\na\t1\t2\t3\n\u00e9"), 0xe9, 0xff])).Message, StringComparison.Ordinal);
        Assert.Contains("UTF-16", Refused(() => PointsOf(Encoding.Unicode.GetPreamble().Concat(Encoding.Unicode.GetBytes(Points)).ToArray())).Message, StringComparison.Ordinal);
        Assert.Contains("NUL", Refused(() => PointsOf(Points + "c\0\t1\t2\t3")).Message, StringComparison.Ordinal);
        Assert.Contains("empty", Refused(() => PointsOf("")).Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData(null, 0.001, "mm")]
    [InlineData("mm", 0.001, "mm")]
    [InlineData("cm", 0.01, "cm")]
    [InlineData("m", 1.0, "m")]
    public void Electrodes_AreInTheUnitOfTheCoordinateFile(string? unit, double metres, string said)
    {
        ElectrodesTable table = Electrodes("name\tx\ty\tz\tmaterial\nCz\t0\t0\t2\tn/a\n", unit is null ? null : $"\ufeff{{\"EEGCoordinateSystem\": \"Other\", \"EEGCoordinateUnits\": \"{unit}\"}}");
        Assert.Equal(said, table.Unit);
        Assert.Equal("Cz", table.Electrodes[0].Name);
        RelativeAssert.Equal(2 * metres, table.Electrodes[0].Position.Z, 1e-15);
        Assert.Empty(table.Warnings);
    }

    [Fact]
    public void ElectrodeWithoutPosition_IsRefusedByName() =>
        Assert.Contains("t.tsv:3: x, z: electrode 'Pz'", Refused(() => Electrodes("name\tx\ty\tz\nCz\t0\t0\t1\nPz\tn/a\t0\tn/a\n", null)).Message, StringComparison.Ordinal);

    [Theory]
    [InlineData("{", "c.json:1:2: this is not valid JSON")]
    [InlineData("[]", "no JSON object")]
    [InlineData("{}", "EEGCoordinateUnits: the key is missing")]
    [InlineData("{\"EEGCoordinateUnits\": 3}", "a text in quotes")]
    [InlineData("{\"EEGCoordinateUnits\": \"inch\"}", "'inch'")]
    [InlineData("{\"EEGCoordinateUnits\": \"\\uD800\"}", "invalid character")]
    public void MalformedCoordinateFile_IsRefusedWithTheReason(string json, string reason) =>
        Assert.Contains(reason, Refused(() => Electrodes("name\tx\ty\tz\nCz\t0\t0\t1\n", json)).Message, StringComparison.Ordinal);

    [Fact]
    public void ForeignCoordinateSystem_IsSaid()
    {
        ElectrodesTable table = Electrodes("name\tx\ty\tz\nCz\t0\t0\t1\n", "{\"EEGCoordinateSystem\": \"Invented\", \"EEGCoordinateUnits\": \"mm\"}");
        Assert.Contains("'Invented'", Assert.Single(table.Warnings), StringComparison.Ordinal);
    }

    [Fact]
    public void Coils_AreGroupedByChannelInOrderOfFirstAppearance()
    {
        CoilsTable table = CoilsOf(Coils
            + "B\taxial-gradiometer\t0\t0\t120\t0\t0\t1\t1\n"
            + "A\tmagnetometer\t0\t120\t0\t0\t1\t0\t0.5\n"
            + "B\taxial-gradiometer\t0\t0\t170\t0\t0\t1\t-1\n"
            + "A\tmagnetometer\t0\t121\t0\t0\t1\t0\t0.5\n"
            + "C\tplanar-gradiometer\t8\t0\t120\t0\t0\t1\t60\n"
            + "C\tplanar-gradiometer\t-8\t0\t120\t0\t0\t1\t-60\n");
        Assert.Equal(["B", "A", "C"], table.Channels.Select(c => c.Name));
        Assert.Equal([CoilKind.AxialGradiometer, CoilKind.Magnetometer, CoilKind.PlanarGradiometer], table.Channels.Select(c => c.Kind));
        Assert.Equal([new CoilPoint(new(0, 0, 0.12), new(0, 0, 1), 1), new CoilPoint(new(0, 0, 0.17), new(0, 0, 1), -1)], table.Channels[0].Points);
        Assert.Empty(table.Warnings);
    }

    // Reference leadfields hold to 1e-11: an axis that is a unit vector to many digits must not be touched.
    [Fact]
    public void AxisOfUnitLength_IsKeptAsGiven()
    {
        CoilsTable kept = CoilsOf(Coils + "A\tmagnetometer\t0\t0\t120\t0.6000000001\t0\t0.8\t1\n");
        Assert.Equal(new Vec3(0.6000000001, 0, 0.8), kept.Channels[0].Points[0].Axis);
        Assert.Empty(kept.Warnings);
        CoilsTable rounded = CoilsOf(Coils + "A\tmagnetometer\t0\t0\t120\t0.6\t0\t0.8005\t1\n");
        RelativeAssert.Equal(1, rounded.Channels[0].Points[0].Axis.Norm, 1e-15);
        Assert.Contains("1 axes", Assert.Single(rounded.Warnings), StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("A\tmagnetometer\t0\t0\t120\t0\t0\t1.1\t1\n", "t.tsv:2: axis_x")]
    [InlineData("A\tmagnetometer\t0\t0\t120\t0\t0\t0\t1\n", "length 0")]
    [InlineData("A\tcoil\t0\t0\t120\t0\t0\t1\t1\n", "t.tsv:2: kind: 'coil'")]
    [InlineData("A\tmagnetometer\t0\t0\t120\t0\t0\t1\t0\n", "all shares")]
    [InlineData("A\tmagnetometer\t0\t0\t120\t0\t0\t1\t1\nA\tplanar-gradiometer\t0\t0\t120\t0\t0\t1\t1\n", "t.tsv:3: kind: channel 'A' is a planar-gradiometer here and a magnetometer in line 2")]
    [InlineData("A\tmagnetometer\tn/a\t0\t120\t0\t0\t1\t1\n", "t.tsv:2: x_mm: 'n/a'")]
    public void MalformedCoil_IsRefusedWithThePlace(string rows, string reason) => Assert.Contains(reason, Refused(() => CoilsOf(Coils + rows)).Message, StringComparison.Ordinal);

    [Fact]
    public void UnbalancedGradiometer_IsSaid() => Assert.Contains(
        "do not add up to 0", Assert.Single(CoilsOf(Coils + "A\taxial-gradiometer\t0\t0\t120\t0\t0\t1\t1\n").Warnings), StringComparison.Ordinal);

    [Fact]
    public void Rows_AreSplitByModalityInOrder()
    {
        RowsTable table = RowsOf("row\tmodality\tkind\tunit\tx\ty\tz\nM1\tMEG\tmagnetometer\tT\t0\t0\t120\nE1\tEEG\telectrode\tV/(A m)\tn/a\tn/a\tn/a\nM2\tMEG\tplanar-gradiometer\tT/m\t\t\t\nE2\tEEG\telectrode\tV\t1\t2\t3\n");
        Assert.Equal(["E1", "E2"], table.Eeg.Select(r => r.Name));
        Assert.Equal([CoilKind.Magnetometer, CoilKind.PlanarGradiometer], table.Meg.Select(r => r.Kind));
        Assert.Equal(new Vec3(0, 0, 0.12), table.Meg[0].Position);
        Assert.Null(table.Eeg[0].Position);
        Assert.Null(table.Meg[1].Position);
    }

    [Theory]
    [InlineData("E1\tEEG\telectrode\tuV", "t.tsv:2: unit: 'uV'")]
    [InlineData("E1\tEEG\tmagnetometer\tV", "t.tsv:2: kind")]
    [InlineData("E1\tECG\telectrode\tV", "t.tsv:2: modality: 'ECG'")]
    [InlineData("M1\tMEG\tplanar-gradiometer\tT", "T/m")]
    [InlineData("M1\tMEG\tmagnetometer\tT/m", "t.tsv:2: unit")]
    [InlineData("M1\tMEG\tmagnetometer\tT\nM1\tMEG\tmagnetometer\tT", "line 2")]
    public void MalformedRow_IsRefusedWithThePlace(string rows, string reason) =>
        Assert.Contains(reason, Refused(() => RowsOf("row\tmodality\tkind\tunit\n" + rows + "\n")).Message, StringComparison.Ordinal);

    private static InputException Refused(Action action)
    {
        InputException error = Assert.Throws<InputException>(action);
        Assert.All(error.Problems, p => Assert.DoesNotContain('\n', p.Message));
        return error;
    }

    private static PointsTable PointsOf(string text) => PointsOf(Encoding.UTF8.GetBytes(text));

    private static PointsTable PointsOf(byte[] bytes)
    {
        using ScratchFolder folder = new();
        return PointsTable.Read(folder.Write("t.tsv", bytes), "t.tsv");
    }

    private static CoilsTable CoilsOf(string text)
    {
        using ScratchFolder folder = new();
        return CoilsTable.Read(folder.Write("t.tsv", text), "t.tsv");
    }

    private static RowsTable RowsOf(string text)
    {
        using ScratchFolder folder = new();
        return RowsTable.Read(folder.Write("t.tsv", text), "t.tsv");
    }

    private static ElectrodesTable Electrodes(string text, string? json)
    {
        using ScratchFolder folder = new();
        string? coordinates = json is null ? null : folder.Write("c.json", json);
        return ElectrodesTable.Read(folder.Write("t.tsv", text), "t.tsv", coordinates, coordinates is null ? null : "c.json");
    }
}
