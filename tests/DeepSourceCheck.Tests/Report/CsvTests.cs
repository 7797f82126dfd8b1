using System.Buffers;
using System.Globalization;
using System.Text;

using DeepSourceCheck.Core.Directions;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Report.Tables;

namespace DeepSourceCheck.Tests.Report;

public class CsvTests
{
    private static readonly DipoleColumn[] Columns = [new(Modality.Eeg, "tangential", "Cz-mastoids"), new(Modality.Both, "given", "a \"quoted\", name")];

    // RFC 4180, section 2, rules 5 to 7.
    [Theory]
    [InlineData("plain", "plain")]
    [InlineData("a,b", "\"a,b\"")]
    [InlineData("say \"x\"", "\"say \"\"x\"\"\"")]
    [InlineData("two\nlines", "\"two\nlines\"")]
    public void Quote_FollowsRfc4180(string field, string written) => Assert.Equal(written, CsvField.Quote(field));

    [Fact]
    public void Dipoles_HeaderIsTheContracts()
    {
        string text = Write(AssessmentFixture.Chunk(0, 2));
        Assert.Equal(
            "response,region,point,x_mm,y_mm,z_mm,v1x,v1y,v1z,v2x,v2y,v2z,v3x,v3y,v3z,s1,s2,s3,split,"
            + "EEG|tangential|Cz-mastoids,\"EEG+MEG|given|a \"\"quoted\"\", name\"\n", text);
    }

    [Fact]
    public void Dipoles_NumbersReadBackToTheSameBits()
    {
        DipoleChunk chunk = AssessmentFixture.Chunk(40, 2);
        string[] lines = Write(chunk).TrimEnd('\n').Split('\n');
        for (int k = 0; k < chunk.Count; k++)
        {
            string[] cells = lines[k + 1].Split(',');
            double[] numbers = [.. cells[3..18].Concat(cells[19..]).Select(c => double.Parse(c, CultureInfo.InvariantCulture))];
            Vec3 p = chunk.Positions[k], v1 = chunk.Directions[3 * k], v3 = chunk.Directions[3 * k + 2], s = chunk.SingularValues[k];
            Assert.Equal([Si.ToMm(p.X), Si.ToMm(p.Y), Si.ToMm(p.Z)], numbers[..3]);
            Assert.Equal([v1.X, v1.Y, v1.Z], numbers[3..6]);
            Assert.Equal([v3.X, v3.Y, v3.Z], numbers[9..12]);
            Assert.Equal([s.X, s.Y, s.Z], numbers[12..15]);
            Assert.Equal([chunk.SnrDb[0][k], chunk.SnrDb[1][k]], numbers[15..]);
            Assert.Equal("ok", cells[18]);
        }
    }

    [Fact]
    public void Dipoles_UndefinedAndSilent_AreEmptyCells()
    {
        DipoleChunk chunk = AssessmentFixture.Chunk(1, 2);
        chunk.States[0] = SplitState.Undefined;
        chunk.Directions[0] = new(double.NaN, double.NaN, double.NaN);
        chunk.Positions[0] = new(-0.0, 0.001, 0);
        chunk.SnrDb[0][0] = double.NegativeInfinity;
        chunk.SnrDb[1][0] = double.NaN;
        string row = Write(chunk).Split('\n')[1];
        Assert.StartsWith("wave V,thalamus-left,p0,0,1,0,,,,", row, StringComparison.Ordinal);
        Assert.EndsWith(",undefined,,", row, StringComparison.Ordinal);
    }

    [Fact]
    public void Dipoles_LongestNumbersAndNames_FitTheBuffer()
    {
        DipoleChunk chunk = AssessmentFixture.Chunk(3, 2);
        Array.Fill(chunk.Positions, new(-1.2345678901234567e-300, -2.2250738585072014e-308, -1.7976931348623157e300));
        Array.Fill(chunk.Directions, new(-2.2250738585072014e-308, -2.2250738585072014e-308, -2.2250738585072014e-308));
        Array.Fill(chunk.SnrDb[0], -2.2250738585072014e-308);
        Array.Fill(chunk.SnrDb[1], -2.2250738585072014e-308);
        chunk.Points[1] = new string('µ', 500) + ",\"";
        Assert.Equal(4, Write(chunk).TrimEnd('\n').Split('\n').Length);
    }

    [Fact]
    public void Dipoles_FormattedOnManyThreads_AreTheSameBytes()
    {
        using DipolesCsv csv = new(Stream.Null);
        csv.Begin(Columns);
        DipoleChunk[] chunks = [.. Enumerable.Range(0, 32).Select(k => AssessmentFixture.Chunk(100, 2, k))];
        byte[][] alone = [.. chunks.Select(chunk => Format(csv, chunk))];
        byte[][] together = new byte[chunks.Length][];
        Parallel.For(0, chunks.Length, k => together[k] = Format(csv, chunks[k]));
        Assert.Equal(alone, together);
    }

    [Fact]
    public void Dipoles_ChunkWithOtherColumns_IsRefused()
    {
        using DipolesCsv csv = new(Stream.Null);
        csv.Begin(Columns);
        Assert.Throws<ArgumentException>(() => Format(csv, AssessmentFixture.Chunk(1, 3)));
    }

    [Fact]
    public void Regions_HaveARowPerMeasureAndRule()
    {
        Assessment a = AssessmentFixture.WithDetection();
        string[] lines = RegionsCsv.Text(a).TrimEnd('\n').Split('\n');
        int expected = a.Responses.Sum(r => r.Regions.Sum(g => g.Results.Sum(m => m.Targets.Count)));
        Assert.Equal(expected + 1, lines.Length);
        int columns = RegionsCsv.Header.Split(',').Length;
        Assert.All(lines, line => Assert.Equal(columns, line.Split(',').Length));
        Assert.Equal(expected, lines.Skip(1).Select(l => string.Join(',', l.Split(',')[..2].Concat(l.Split(',')[4..8]))).Distinct().Count());
    }

    [Fact]
    public void Regions_SilentRow_HasEmptyCellsReasonAndLeak()
    {
        string[] header = RegionsCsv.Header.Split(',');
        string[] row = RegionsCsv.Text(AssessmentFixture.Silent()).Split('\n').First(l => l.Contains("MEG,quasi-radial,best-channel", StringComparison.Ordinal)).Split(',');
        string Cell(string name) => row[Array.IndexOf(header, name)];
        Assert.Equal("", Cell("snr_db_p50"));
        Assert.Equal("", Cell("trials_p50"));
        Assert.Equal("0.06", Cell("leak"));
        Assert.NotEqual("", Cell("leak_trials_p50"));
        Assert.StartsWith("silent", Cell("reason"), StringComparison.Ordinal);
    }

    private static byte[] Format(DipolesCsv csv, DipoleChunk chunk)
    {
        var text = new ArrayBufferWriter<byte>();
        csv.Format(chunk, text);
        return text.WrittenSpan.ToArray();
    }

    private static string Write(DipoleChunk chunk)
    {
        using MemoryStream stream = new();
        using (DipolesCsv csv = new(stream))
        {
            csv.Begin(Columns);
            csv.Append(Format(csv, chunk));
        }

        return Encoding.UTF8.GetString(stream.ToArray());
    }
}
