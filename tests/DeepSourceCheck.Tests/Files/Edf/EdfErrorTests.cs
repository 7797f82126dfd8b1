using System.Text;

using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Edf;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Files.Edf;

/// <summary>One test a malformed field: file, field, value and what is allowed.</summary>
public sealed class EdfErrorTests : IDisposable
{
    // Two signals of 100 samples, two records: header of 768 bytes, records of 400.
    private static readonly EdfBytes Sound = new() { Signals = [new("EEG Cz", [.. Enumerable.Range(0, 200).Select(n => n * 0.5)]), new("EEG Pz", new double[200])] };

    private readonly ScratchFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    private InputProblem Problem(byte[] bytes, double? from = null, double? to = null, int[]? signals = null)
    {
        string path = _folder.Write("r.edf", bytes);
        InputProblem problem = Assert.Single(Assert.Throws<InputException>(() => EdfReader.Read(path, "r.edf", signals ?? [0, 1], from, to)).Problems);
        Assert.Equal("r.edf", problem.File);
        return problem;
    }

    private static byte[] With(int at, int width, string text, EdfBytes? file = null)
    {
        byte[] bytes = (file ?? Sound).ToArray();
        Encoding.Latin1.GetBytes(text.PadRight(width)).CopyTo(bytes, at);
        return bytes;
    }

    [Theory]
    // Places of the fields: table 1 of Kemp et al. 1992; of two signals, 256 + widths before x 2.
    [InlineData(0, 8, "RIFF", "version", "neither EDF")]
    [InlineData(184, 8, "700", "number of bytes in header", "is 700|must be 768")]
    [InlineData(184, 8, "abc", "number of bytes in header", "'abc'|whole number")]
    [InlineData(236, 8, "3", "number of data records", "is 3|holds 2 of 400 bytes|truncated")]
    [InlineData(236, 8, "1", "number of data records", "is 1|holds 2|no record accounts for")]
    [InlineData(236, 8, "0", "number of data records", "is 0|at least 1")]
    [InlineData(236, 8, "-2", "number of data records", "is -2|at least 1")]
    [InlineData(236, 8, "1.5", "number of data records", "'1.5'|whole number")]
    [InlineData(244, 8, "1,0", "duration of a data record", "'1,0'|decimal point")]
    [InlineData(244, 8, "-1", "duration of a data record", "is -1 s")]
    [InlineData(244, 8, "0", "duration of a data record", "is 0 s|annotations alone")]
    [InlineData(244, 8, "NaN", "duration of a data record", "'NaN'|number")]
    [InlineData(252, 4, "0", "number of signals", "is 0|1 to 9999")]
    [InlineData(252, 4, "2x", "number of signals", "'2x'|whole number")]
    [InlineData(448, 8, "kOhm", "physical dimension of signal 1 (EEG Cz)", "'kOhm'|nV, uV, mV or V")]
    [InlineData(448, 8, "\u00B5V", "physical dimension of signal 1 (EEG Cz)", "byte 181|printable ASCII|written uV")]
    [InlineData(464, 8, "-2OO", "physical minimum of signal 1 (EEG Cz)", "'-2OO'|number")]
    [InlineData(480, 8, "-200", "physical maximum of signal 1 (EEG Cz)", "is -200|must differ")]
    [InlineData(496, 8, "-40000", "digital minimum of signal 1 (EEG Cz)", "is -40000|-32768 to 32767")]
    [InlineData(512, 8, "-32768", "digital maximum of signal 1 (EEG Cz)", "is -32768|not above the digital minimum")]
    [InlineData(528, 8, "H\u00FC", "prefiltering of signal 1 (EEG Cz)", "byte 252|printable ASCII")]
    [InlineData(688, 8, "0", "number of samples of signal 1 (EEG Cz)", "is 0|allowed is 1")]
    [InlineData(688, 8, "99999999", "number of samples of signal 1 (EEG Cz)", "99999999|more than the file has")]
    [InlineData(256, 16, "EEG\tCz", "label of signal 1", "byte 9")]
    public void MalformedField_IsNamedWithItsValue(int at, int width, string text, string field, string parts)
    {
        InputProblem problem = Problem(With(at, width, text));
        Assert.Equal(field, problem.Key);
        Assert.All(parts.Split('|'), part => Assert.Contains(part, problem.Message, StringComparison.Ordinal));
    }

    [Theory]
    [InlineData(100, "header", "100 bytes, fewer than its header (256)")]
    [InlineData(700, "header", "700 bytes, fewer than its header (768)")]
    [InlineData(768 + 399, "number of data records", "holds 0 and 399 bytes of another")]
    [InlineData(768 + 799, "number of data records", "holds 1 and 399 bytes of another")]
    public void TruncatedFile_IsRefused(int bytes, string field, string part)
    {
        InputProblem problem = Problem(Sound.ToArray()[..bytes]);
        Assert.Equal(field, problem.Key);
        Assert.Contains(part, problem.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void OpenCount_WithPartOfARecord_IsRefused() =>
        Assert.Contains("is -1 (not known when the recording began)", Problem(With(236, 8, "-1")[..(768 + 500)]).Message, StringComparison.Ordinal);

    [Fact]
    public void EveryTruncation_IsARefusal_NeverAnythingElse()
    {
        byte[] whole = Sound.ToArray();
        for (int length = 1; length < whole.Length; length += 7)
        {
            Problem(whole[..length]);
        }
    }

    [Fact]
    public void DifferentRates_AreRefusedWithBoth()
    {
        EdfBytes file = Sound with { Signals = [Sound.Signals[0], new("EEG Pz", new double[100]) { PerRecord = 50 }] };
        InputProblem problem = Problem(file.ToArray());
        Assert.Contains("is 50 a record, 50 Hz, while signal 1 (EEG Cz) has 100 Hz", problem.Message, StringComparison.Ordinal);
        _folder.Write("one.edf", file.ToArray());
        Assert.Equal(50, EdfReader.Read(_folder.At("one.edf"), "one.edf", [1]).SamplingRate);
    }

    [Theory]
    [InlineData(2.0, null, "noise.eeg_recording.from_s", "is 2 s, but the recording ends at 2 s")]
    [InlineData(null, 2.5, "noise.eeg_recording.to_s", "is 2.5 s, but the recording ends at 2 s")]
    [InlineData(1.0, 1.0, "noise.eeg_recording.from_s", "1 to 1 s lies in a gap of the recording, or holds no sample")]
    public void PartThatIsNotThere_IsRefused(double? from, double? to, string key, string part)
    {
        InputProblem problem = Problem(Sound.ToArray(), from, to);
        Assert.Equal(key, problem.Key);
        Assert.Contains(part, problem.Message, StringComparison.Ordinal);
    }

    private static EdfBytes Gaps(params string[] stamps) => new()
    {
        Reserved = "EDF+D",
        Signals = [new("EEG Cz", new double[100 * stamps.Length]), new("EDF Annotations", []) { Annotations = stamps, PerRecord = 20 }],
    };

    [Fact]
    public void RecordBeforeTheEndOfTheOneBefore_IsRefused()
    {
        InputProblem problem = Problem(Gaps(EdfBytes.Stamp(0), EdfBytes.Stamp(0.5)).ToArray(), signals: [0]);
        Assert.Equal("annotations of data record 2", problem.Key);
        Assert.Contains("starts at 0.5 s, before", problem.Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("")]
    [InlineData("12.5\u0014\u0014")]
    [InlineData("+1x\u0014\u0014")]
    [InlineData("+1")]
    [InlineData("+1\u0014Start\u0014")]
    public void RecordWithoutATimeStamp_IsRefused(string stamp)
    {
        InputProblem problem = Problem(Gaps(EdfBytes.Stamp(0), stamp).ToArray(), signals: [0]);
        Assert.Equal("annotations of data record 2", problem.Key);
        Assert.Contains("begins with its start in seconds", problem.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void DiscontinuousFile_WithoutAnnotations_IsRefused() =>
        Assert.Contains("discontinuous (EDF+D) but has no channel of annotations", Problem(With(192, 44, "EDF+D")).Message, StringComparison.Ordinal);

    [Fact]
    public void PartInAGap_IsRefused() =>
        Assert.Contains("2 to 4 s lies in a gap", Problem(Gaps(EdfBytes.Stamp(0), EdfBytes.Stamp(5)).ToArray(), 2, 4, [0]).Message, StringComparison.Ordinal);

    [Fact]
    public void IdentifyingFields_AreNeitherCheckedNorRead()
    {
        byte[] bytes = With(8, 80, "J\u00FCrgen");
        _folder.Write("named.edf", bytes);
        Assert.Equal(2, EdfReader.ReadHeader(_folder.At("named.edf"), "named.edf").Records);
    }
}
