using System.Buffers.Binary;

using DeepSourceCheck.Core.Noise.Recordings;
using DeepSourceCheck.Core.Studies;

using static System.FormattableString;

namespace DeepSourceCheck.Files.Edf;

/// <summary>Recordings in EDF, EDF+ (continuous or not) and BDF. The header is read apart from the data, and sizes are checked against the file before memory is taken.</summary>
public static class EdfReader
{
    /// <summary>Most samples that are held at once, over all channels: 1 GiB of potentials.</summary>
    public const long MostSamples = 1L << 27;

    private const string FromKey = "noise.eeg_recording.from_s", ToKey = "noise.eeg_recording.to_s";

    /// <summary>Reads and checks the header alone.</summary>
    /// <param name="path">File.</param>
    /// <param name="displayName">As the user named it.</param>
    /// <exception cref="InputException">No such file, a malformed field, or a file that does not hold what its header says.</exception>
    public static EdfHeader ReadHeader(string path, string displayName)
    {
        using FileStream file = InputFileAccess.Open(path, displayName);
        return Header(file, displayName);
    }

    /// <summary>Reads channels of a part of the recording.</summary>
    /// <param name="path">File.</param>
    /// <param name="displayName">As the user named it.</param>
    /// <param name="signals">Places of the channels among the file's signals, in the order wanted.</param>
    /// <param name="from">Start [s] after the first sample of the file; null for the whole.</param>
    /// <param name="to">End [s], likewise.</param>
    /// <returns>Potentials in V. Gaps of a discontinuous file part its stretches; nothing is put in their place.</returns>
    /// <exception cref="InputException">As <see cref="ReadHeader"/>; signals of different rates or that are no potentials; a part that the recording does not have; more than fits.</exception>
    public static Recording Read(string path, string displayName, IReadOnlyList<int> signals, double? from = null, double? to = null)
    {
        using FileStream file = InputFileAccess.Open(path, displayName);
        EdfHeader header = Header(file, displayName);
        EdfSignal[] wanted = [.. signals.Select(k => header.Signals[k])];
        double[] volts = [.. wanted.Select(s => EdfUnits.Volts(s, displayName))];
        foreach (EdfSignal other in wanted.Where(s => s.SamplesPerRecord != wanted[0].SamplesPerRecord))
        {
            throw new InputException(displayName, $"number of samples of {other.Name}", Invariant(
                $"is {other.SamplesPerRecord} a record, {other.SamplesPerRecord / header.RecordSeconds:0.###} Hz, while {wanted[0].Name} has {wanted[0].SamplesPerRecord / header.RecordSeconds:0.###} Hz; channels of one rate are needed: export them at the same, or leave one out"));
        }

        double rate = wanted[0].SamplesPerRecord / header.RecordSeconds;
        double[] starts = header.Discontinuous ? Starts(file, header) : [.. Enumerable.Range(0, Count(header)).Select(k => k * header.RecordSeconds)];
        IReadOnlyList<int> first = header.Discontinuous ? EdfRecordTimes.Stretches(starts, header, 1 / rate) : [0];
        List<(double Start, int Record, long Skip, long Count)> parts = Parts(header, starts, first, wanted[0].SamplesPerRecord, rate, from, to, displayName);
        long total = parts.Sum(p => p.Count) * wanted.Length;
        if (total > MostSamples)
        {
            throw new InputException(displayName, ToKey, Invariant(
                $"{total / wanted.Length / rate:0} s of {wanted.Length} channels at {rate:0.###} Hz are more than is held at once; state from_s and to_s, at most {MostSamples / wanted.Length / rate:0} s apart: minutes of baseline suffice"));
        }

        var atLimit = new long[wanted.Length];
        return new Recording
        {
            SamplingRate = rate,
            Stretches = [.. parts.Select(p => Stretch(file, header, wanted, volts, p, atLimit))],
            AtLimit = atLimit,
        };
    }

    private static EdfHeader Header(FileStream file, string displayName) => InputFileAccess.Guard(displayName, () =>
    {
        var first = new byte[EdfHeaderParser.FixedBytes];
        Require(file, displayName, first.Length);
        file.ReadExactly(first);
        int bytes = EdfHeaderParser.HeaderBytes(first, displayName);
        Require(file, displayName, bytes);
        var whole = new byte[bytes];
        first.CopyTo(whole, 0);
        file.ReadExactly(whole, first.Length, bytes - first.Length);
        return EdfHeaderParser.Parse(whole, file.Length, displayName);
    });

    private static void Require(FileStream file, string displayName, int bytes)
    {
        if (file.Length < bytes)
        {
            throw new InputException(displayName, "header", Invariant($"the file has {file.Length:N0} bytes, fewer than its header ({bytes:N0}): it is truncated or no EDF or BDF file"));
        }
    }

    private static int Count(EdfHeader header) => header.Records <= int.MaxValue ? (int)header.Records
        : throw new InputException(header.DisplayName, "number of data records", "is more than a recording has; export it again");

    private static double[] Starts(FileStream file, EdfHeader header)
    {
        EdfSignal keeper = EdfRecordTimes.Keeper(header);
        var bytes = new byte[keeper.SamplesPerRecord * header.SampleBytes];
        var starts = new double[Count(header)];
        for (int k = 0; k < starts.Length; k++)
        {
            Fill(file, header, k, keeper.Offset, bytes);
            starts[k] = EdfRecordTimes.Start(bytes, k, header);
        }

        return [.. starts.Select(s => s - starts[0])];
    }

    // Of every stretch the samples from `from` on and before `to`.
    private static List<(double Start, int Record, long Skip, long Count)> Parts(
        EdfHeader header, double[] starts, IReadOnlyList<int> first, int perRecord, double rate, double? from, double? to, string displayName)
    {
        double end = starts[^1] + header.RecordSeconds;
        // Half a sample of grace: a recording of 60 s may end at 59.9999 by rounding.
        if (from >= end || to > end + 0.5 / rate)
        {
            throw new InputException(displayName, from >= end ? FromKey : ToKey, Invariant($"is {(from >= end ? from : to)} s, but the recording ends at {end:0.######} s"));
        }

        var parts = new List<(double, int, long, long)>();
        for (int k = 0; k < first.Count; k++)
        {
            double start = starts[first[k]];
            long samples = (long)((k + 1 < first.Count ? first[k + 1] : starts.Length) - first[k]) * perRecord;
            long skip = Sample(from, 0), stop = Sample(to, samples);
            if (stop > skip)
            {
                parts.Add((start + skip / rate, first[k], skip, stop - skip));
            }

            long Sample(double? time, long otherwise) => time is { } t ? (long)Math.Clamp(Math.Ceiling((t - start) * rate - 1e-6), 0, samples) : otherwise;
        }

        return parts.Count > 0 ? parts : throw new InputException(displayName, FromKey, Invariant($"{from ?? 0} to {to ?? end} s lies in a gap of the recording, or holds no sample; choose a part that was recorded"));
    }

    private static RecordedStretch Stretch(
        FileStream file, EdfHeader header, EdfSignal[] wanted, double[] volts, (double Start, int Record, long Skip, long Count) part, long[] atLimit)
    {
        int perRecord = wanted[0].SamplesPerRecord;
        var values = new double[wanted.Length][];
        for (int c = 0; c < values.Length; c++)
        {
            values[c] = new double[part.Count];
        }

        var record = new byte[header.RecordBytes];
        long at = 0;
        for (long k = part.Record + part.Skip / perRecord; at < part.Count; k++)
        {
            Fill(file, header, k, 0, record);
            int skip = at == 0 ? (int)(part.Skip % perRecord) : 0, take = (int)Math.Min(perRecord - skip, part.Count - at);
            for (int c = 0; c < values.Length; c++)
            {
                atLimit[c] += Convert(record, header, wanted[c], volts[c], skip, values[c].AsSpan((int)at, take));
            }

            at += take;
        }

        return new RecordedStretch(part.Start, values);
    }

    // Samples in V; returns how many stand at the ends of the digital range.
    private static int Convert(byte[] record, EdfHeader header, EdfSignal signal, double volts, int skip, Span<double> to)
    {
        double gain = volts * (signal.PhysicalMaximum - signal.PhysicalMinimum) / ((double)signal.DigitalMaximum - signal.DigitalMinimum), zero = volts * signal.PhysicalMinimum;
        int limit = 0;
        for (int n = 0; n < to.Length; n++)
        {
            ReadOnlySpan<byte> at = record.AsSpan(signal.Offset + (skip + n) * header.SampleBytes, header.SampleBytes);
            int digital = header.SampleBytes == 2 ? BinaryPrimitives.ReadInt16LittleEndian(at) : at[0] | (at[1] << 8) | ((sbyte)at[2] << 16);
            limit += digital <= signal.DigitalMinimum || digital >= signal.DigitalMaximum ? 1 : 0;
            to[n] = zero + gain * (digital - signal.DigitalMinimum);
        }

        return limit;
    }

    private static void Fill(FileStream file, EdfHeader header, long record, int offset, byte[] bytes) => InputFileAccess.Guard(header.DisplayName, () =>
    {
        file.Position = header.HeaderBytes + record * header.RecordBytes + offset;
        file.ReadExactly(bytes);
        return true;
    });
}
