using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Files.Tables;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Files.Tables;

public class DensityTableTests
{
    [Theory]
    [InlineData("frequency_Hz,density_uV_per_rtHz\n1,4\n10,2\n40,0.5\n")]
    [InlineData("\ufeffdensity_uV_per_rtHz, frequency_Hz ,note\r\n4, 1,a\r\n\r\n2,10,b\r\n0.5,40,\r\n")]
    public void Table_IsReadInSi_WhateverItsColumnOrderAndLineEnds(string text)
    {
        LogLogTable table = Read(text);
        Assert.Equal([1.0, 10, 40], table.Frequencies);
        Assert.Equal((1.0, 40.0), (table.KnownFrom, table.KnownTo));
        RelativeAssert.Equal(2e-6, table.DensityAt(10), 1e-15);
        RelativeAssert.Equal(Math.Sqrt(8) * 1e-6, table.DensityAt(Math.Sqrt(10)), 1e-12, "a power law between rows");
    }

    [Theory]
    [InlineData("frequency_Hz,density_uV_per_rtHz\n1,4\n10,x\n", "t.csv:3: density_uV_per_rtHz: 'x' is not a number")]
    [InlineData("frequency_Hz,density_uV_per_rtHz\n1,4\n10,0\n", "t.csv:3: density_uV_per_rtHz: the density 0 is not above 0")]
    [InlineData("frequency_Hz,density_uV_per_rtHz\n1,4\n10,-2\n", "t.csv:3: density_uV_per_rtHz: the density -2 is not above 0")]
    [InlineData("frequency_Hz,density_uV_per_rtHz\n1,4\n10,NaN\n", "t.csv:3: density_uV_per_rtHz: 'NaN' is out of range")]
    [InlineData("frequency_Hz,density_uV_per_rtHz\n0,4\n10,2\n", "t.csv:2: frequency_Hz: the frequency 0 Hz is not above 0")]
    [InlineData("frequency_Hz,density_uV_per_rtHz\n10,4\n1,2\n", "t.csv:3: frequency_Hz: the frequency 1 Hz does not lie above that of line 2 (10 Hz)")]
    [InlineData("frequency_Hz,density_uV_per_rtHz\n1,4\n1,2\n", "t.csv:3: frequency_Hz: the frequency 1 Hz does not lie above")]
    [InlineData("frequency_Hz,density_uV_per_rtHz\n1,4\n10,2,5\n", "t.csv:3: the row has 3 cells and the header 2; separate cells by single commas and write decimal points")]
    [InlineData("frequency_Hz,density_uV_per_rtHz\n1,4\n", "t.csv: the table has a single row")]
    [InlineData("frequency_Hz,density_uV_per_rtHz\n", "t.csv: the table has a header but no rows")]
    [InlineData("frequency_Hz,density_nV_per_rtHz\n1,4\n10,2\n", "t.csv:1: density_uV_per_rtHz: the column is missing; the header has: frequency_Hz, density_nV_per_rtHz")]
    [InlineData("1,4\n10,2\n", "t.csv:1: frequency_Hz: the column is missing")]
    [InlineData("frequency_Hz\tdensity_uV_per_rtHz\n1\t4\n", "(columns are separated by commas)")]
    [InlineData("\n\n", "the file holds no text")]
    [InlineData("", "the file is empty")]
    public void BadRow_IsRefused_WithFileLineAndField(string text, string said) => Assert.Contains(said, Assert.Throws<InputException>(() => Read(text)).Message, StringComparison.Ordinal);

    [Fact]
    public void EveryBadRow_IsReportedAtOnce() =>
        Assert.Equal(3, Assert.Throws<InputException>(() => Read("frequency_Hz,density_uV_per_rtHz\n-1,4\n5,0\n4,1\n")).Problems.Count);

    private static LogLogTable Read(string text)
    {
        using ScratchFolder folder = new();
        return DensityTable.Read(folder.Write("t.csv", text), "t.csv", DensityTable.Microvolts, Si.FromMicrovolts);
    }
}
