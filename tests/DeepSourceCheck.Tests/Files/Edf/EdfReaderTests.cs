using DeepSourceCheck.Core.Noise.Recordings;
using DeepSourceCheck.Files.Edf;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Files.Edf;

/// <summary>Files that the tests write from the specifications are read back sample by sample.</summary>
public sealed class EdfReaderTests : IDisposable
{
    private readonly ScratchFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    private static double[] Ramp(int samples, double from, double step) => [.. Enumerable.Range(0, samples).Select(n => from + step * n)];

    private Recording Read(EdfBytes file, int[] signals, double? from = null, double? to = null) => EdfReader.Read(_folder.Write("r.edf", file.ToArray()), "r.edf", signals, from, to);

    [Theory]
    [InlineData(false, 400.0 / 65535)]
    [InlineData(true, 400.0 / 16777215)]
    public void Samples_AreThoseWritten_WithinHalfADigitalStep(bool bdf, double stepMicrovolts)
    {
        EdfTestSignal a = new("EEG Cz", Ramp(300, -190, 1.21)), b = new("EEG Pz", Ramp(300, 150, -1.03));
        Recording read = Read(new EdfBytes { Bdf = bdf, Signals = [a, b] }, [1, 0]);
        RecordedStretch stretch = Assert.Single(read.Stretches);
        Assert.Equal((100.0, 3.0), (read.SamplingRate, read.Seconds));
        for (int n = 0; n < 300; n++)
        {
            Assert.InRange(Math.Abs(stretch.Values[0][n] * 1e6 - b.Values[n]), 0, 0.5001 * stepMicrovolts);
            Assert.InRange(Math.Abs(stretch.Values[1][n] * 1e6 - a.Values[n]), 0, 0.5001 * stepMicrovolts);
        }
    }

    [Fact]
    public void WorkedSample_OfTheSpecification_HasItsPhysicalValue()
    {
        // Gain (200 - -200)/(2047 - -2048) uV a step, offset from the digital minimum: by hand. Bytes little-endian, two's complement.
        EdfTestSignal signal = new("EEG Cz", [-200, 200, 0.04884]) { Digital = (-2048, 2047) };
        byte[] bytes = new EdfBytes { Signals = [signal], PerRecord = 3 }.ToArray();
        Assert.Equal([0x00, 0xF8, 0xFF, 0x07, 0x00, 0x00], bytes[512..]);
        double[] read = Read(new EdfBytes { Signals = [signal], PerRecord = 3 }, [0]).Stretches[0].Values[0];
        RelativeAssert.Close([-200e-6, 200e-6, (-200 + 2048 * 400.0 / 4095) * 1e-6], read, 1e-15);
    }

    [Theory]
    [InlineData("nV", 1e-9)]
    [InlineData("uV", 1e-6)]
    [InlineData("mV", 1e-3)]
    [InlineData("V", 1.0)]
    public void Units_AreThoseOfTheHeader(string unit, double volts)
    {
        Recording read = Read(new EdfBytes { Signals = [new("EEG Cz", Ramp(100, -50, 1)) { Unit = unit }] }, [0]);
        RelativeAssert.Equal(-50 * volts, read.Stretches[0].Values[0][0], 1e-4);
    }

    [Fact]
    public void InvertedPhysicalRange_TurnsTheSign()
    {
        // Physical minimum above the maximum is a negative gain (EDF, "negative amplifier gain").
        Recording read = Read(new EdfBytes { Signals = [new("EEG Cz", Ramp(100, -50, 1)) { PhysicalMinimum = 200, PhysicalMaximum = -200 }] }, [0]);
        RelativeAssert.Equal(-50e-6, read.Stretches[0].Values[0][0], 1e-4);
    }

    [Fact]
    public void PartOfARecording_HasTheSamplesFromItsStartAndBeforeItsEnd()
    {
        double[] values = Ramp(500, -150, 0.5);
        EdfBytes file = new() { Signals = [new("A", values)] };
        RecordedStretch part = Assert.Single(Read(file, [0], 0.755, 3.1).Stretches);
        Assert.Equal(0.76, part.Start, 1e-12);
        Assert.Equal(310 - 76, part.Values[0].Length);
        RelativeAssert.Equal(values[76] * 1e-6, part.Values[0][0], 1e-3);
        RelativeAssert.Equal(values[309] * 1e-6, part.Values[0][^1], 1e-3);
    }

    [Theory]
    [InlineData(false)]
    [InlineData(true)]
    public void GapsOfADiscontinuousFile_PartItsStretches_AndNothingIsLost(bool bdf)
    {
        // Four records of 1 s at 0, 1, 5.5 and 6.5 s after the first, whose stamp is a fraction of a second after the start of the file.
        string[] stamps = [.. new[] { 0.25, 1.25, 5.75, 6.75 }.Select(EdfBytes.Stamp)];
        double[] values = Ramp(400, -100, 0.5);
        EdfBytes file = new()
        {
            Bdf = bdf,
            Reserved = bdf ? "BDF+D" : "EDF+D",
            Signals = [new("EEG Cz", values), new(bdf ? "BDF Annotations" : "EDF Annotations", []) { Annotations = stamps, PerRecord = 20 }],
        };
        Recording read = Read(file, [0]);
        Assert.Equal([0.0, 5.5], read.Stretches.Select(s => s.Start));
        Assert.Equal([200, 200], read.Stretches.Select(s => s.Values[0].Length));
        RelativeAssert.Equal(values[200] * 1e-6 + 1, read.Stretches[1].Values[0][0] + 1, 1e-7);

        Recording across = Read(file, [0], 1.5, 6);
        Assert.Equal([1.5, 5.5], across.Stretches.Select(s => s.Start));
        Assert.Equal([50, 50], across.Stretches.Select(s => s.Values[0].Length));
    }

    [Fact]
    public void ContinuousPlusFile_IsOneStretch_WhateverItsAnnotationsSay()
    {
        EdfBytes file = new()
        {
            Reserved = "EDF+C",
            Signals = [new("EDF Annotations", []) { Annotations = [EdfBytes.Stamp(0), EdfBytes.Stamp(1)], PerRecord = 20 }, new("EEG Cz", Ramp(200, 0, 0.5))],
        };
        Assert.Equal(200, Assert.Single(Read(file, [1]).Stretches).Values[0].Length);
    }

    [Fact]
    public void UnknownNumberOfRecords_IsCountedFromTheFile()
    {
        byte[] bytes = new EdfBytes { Records = "-1", Signals = [new("A", Ramp(300, 0, 0.5))] }.ToArray();
        EdfHeader header = EdfReader.ReadHeader(_folder.Write("open.edf", bytes), "open.edf");
        Assert.Equal((3L, true), (header.Records, header.RecordsCounted));
    }

    [Fact]
    public void SamplesAtTheEndOfTheRange_AreCounted()
    {
        Recording read = Read(new EdfBytes { Signals = [new("A", [.. Enumerable.Repeat(0.0, 96), 200, 250, -200, 0]), new("B", Ramp(100, 0, 1))] }, [0, 1]);
        Assert.Equal([3L, 0], read.AtLimit);
    }

    [Theory]
    // EDF+ section 2.1.3.3, and what stands in files in its place.
    [InlineData("HP:0.1Hz LP:75Hz N:50Hz", 0.1, 75.0)]
    [InlineData("HP: DC; LP: 417 Hz", 0.0, 417.0)]
    [InlineData("HP:100mHz LP:2.5kHz", 0.1, 2500.0)]
    [InlineData("LP:70Hz", null, 70.0)]
    [InlineData("N:50Hz", null, null)]
    [InlineData("", null, null)]
    [InlineData("HP:0.5Hz HP:1Hz LP:100Hz LP:70Hz", 1.0, 70.0)]
    public void Prefilter_IsReadFromItsText(string text, double? high, double? low) => Assert.Equal(new EdfPrefilter(high, low), EdfPrefilter.Parse(text));
}
