using System.Globalization;

using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Noise.Recordings;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Files.Edf;
using DeepSourceCheck.Files.Studies;

using static System.FormattableString;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>The EEG noise of a study from its baseline recording: one covariance a band, with what the user must know of it.</summary>
internal static class BaselineAssembly
{
    /// <summary>The study's key.</summary>
    public const string Key = "noise.eeg_recording";

    // Samples per upper edge of a band, as for sensors.sampling_Hz.
    private const double LeastSampling = 2.5;

    // Length of a segment [s] where neither the study nor a response states one.
    private const double UsualSegment = 1;

    // Held-out shares below this are told, a share; so is a rejection above this.
    private const double GoodShare = 0.9, MuchRejected = 0.3;

    /// <summary>Reads the recording and computes the noise of every band.</summary>
    /// <param name="reading">The study as read.</param>
    /// <param name="choice">The recording.</param>
    /// <param name="sensors">Electrodes.</param>
    /// <param name="inputs">Receives the file.</param>
    /// <param name="warnings">Receives what the user must know.</param>
    /// <exception cref="InputException">The file is malformed, does not fit the study, or cannot be meant.</exception>
    public static IReadOnlyList<RecordedNoise> Build(StudyReading reading, RecordingChoice choice, SensorAssembly sensors, InputDigests inputs, List<string> warnings)
    {
        try
        {
            return Read(reading, choice, sensors, inputs, warnings);
        }
        catch (InputException error)
        {
            throw new InputException([.. error.Problems.Select(p => p.File is null ? reading.Problem(p.Key ?? Key, p.Message) : p with { Key = p.Key ?? Key })]);
        }
    }

    /// <summary>What was read off a recording, as values that entered the answer.</summary>
    /// <param name="recorded">Noise of each band.</param>
    public static IReadOnlyList<Assumption> Found(IReadOnlyList<RecordedNoise> recorded)
    {
        var found = new List<Assumption>();
        foreach (RecordedNoise noise in recorded)
        {
            void Add(string what, double value, string unit, string source) =>
                found.Add(new(Invariant($"{Key} ({noise.Band.Low:0.###} to {noise.Band.High:0.###} Hz): {what}"), Rounded(value), unit, FromStudy: false, source, Grade.Derived));
            Add("seconds used", noise.SecondsUsed, "s", Invariant($"of {noise.SecondsRead:0.###} s read, in segments of {1000 * noise.SegmentSeconds:0.###} ms"));
            Add("rejected share", noise.RejectedShare, "", Invariant($"{noise.Rejected} of {noise.Segments} segments exceed limit_uV"));
            Add("independent samples", noise.IndependentSamples, "", Invariant($"twice the bandwidth of {noise.BandRead.Low:0.###} to {noise.BandRead.High:0.###} Hz times the seconds used"));
            Add("shrinkage", noise.Shrinkage, "", "weight of equal variance; Ledoit and Wolf 2004, from memory");
            Add("held-out share", noise.HeldOutShare, "", "power that filters built from one half reach on the other, over what they promise: factor of the matched filter");
        }

        return found;
    }

    private static List<RecordedNoise> Read(StudyReading reading, RecordingChoice choice, SensorAssembly sensors, InputDigests inputs, List<string> warnings)
    {
        Study study = reading.Study;
        if (study.Eeg?.Reference.Kind == ReferenceKind.None)
        {
            throw new InputException(null, "sensors.eeg.reference", $"is none, but a recording is always against some reference ({Key} is taken against the average of the electrodes); state average or the electrodes that serve as reference");
        }

        if (sensors.Electrodes.Count < 2)
        {
            throw new InputException(null, Key, "needs two electrodes or more: a potential is a difference");
        }

        string[] electrodes = [.. sensors.Electrodes.Select(e => e.Name)];
        (string path, string display) = inputs.Use(choice.File);
        EdfHeader header = EdfReader.ReadHeader(path, display);
        int[] signals = EdfChannels.Match(header, electrodes, choice.Channels, choice.Reference);
        int[] wanted = [.. signals.Where(s => s >= 0)];
        CheckRate(header, header.Signals[wanted[0]], study.Responses);
        CheckPrefilters(header, [.. wanted.Select(s => header.Signals[s])], study.Responses, warnings);
        if (header.RecordsCounted)
        {
            warnings.Add(Invariant($"{display}: its header leaves the number of data records open (-1); the file holds {header.Records}, and they were taken: the recording may have been cut short"));
        }

        Recording recording = EdfReader.Read(path, display, wanted, choice.From, choice.To);
        CheckSignals(header, wanted, recording, warnings);
        int next = 0;
        var baseline = new BaselineNoise { File = choice.File, Recording = recording, RowOf = [.. signals.Select(s => s < 0 ? -1 : next++)], Limit = choice.Limit };
        var noises = new List<RecordedNoise>();
        foreach (IGrouping<Band, Response> responses in study.Responses.GroupBy(r => r.Band))
        {
            RecordedNoise noise = baseline.InBand(responses.Key, choice.Segment ?? responses.Max(r => r.Window) ?? UsualSegment, Read(responses.First()));
            Judge(reading, noise, string.Join(", ", responses.Select(r => r.Name)), electrodes.Length, warnings);
            noises.Add(noise);
        }

        return noises;
    }

    private static Band Read(Response response) => response.Steady is { } steady ? BaselineNoise.Around(steady) : response.Band;

    private static void CheckRate(EdfHeader header, EdfSignal signal, IReadOnlyList<Response> responses)
    {
        double rate = signal.SamplesPerRecord / header.RecordSeconds;
        foreach (Response response in responses.Where(r => rate < LeastSampling * Read(r).High))
        {
            throw new InputException(null, Key, Invariant(
                $"{header.DisplayName} was sampled at {rate:0.###} Hz, less than {LeastSampling} times the upper edge of {response.Name}'s band ({Read(response).High:0.###} Hz): it does not hold the noise of that band; record at {LeastSampling * Read(response).High:0.###} Hz or more, or lower the edge"));
        }
    }

    // What a filter has taken out of the baseline is no quiet.
    private static void CheckPrefilters(EdfHeader header, IReadOnlyList<EdfSignal> signals, IReadOnlyList<Response> responses, List<string> warnings)
    {
        foreach (EdfSignal signal in signals.DistinctBy(s => s.Prefilter))
        {
            EdfPrefilter filter = EdfPrefilter.Parse(signal.Prefilter);
            foreach (Response response in responses)
            {
                Band band = Read(response);
                string both = Invariant($"{header.DisplayName} was recorded with the filters '{signal.Prefilter}' ({signal.Label}), {response.Name} has the band {band.Low:0.###} to {band.High:0.###} Hz");
                if (filter.HighPass >= band.High || filter.LowPass <= band.Low)
                {
                    throw new InputException(null, Key, $"{both}: the recording holds nothing of it; record with a wider band");
                }

                if (filter.HighPass > band.Low || filter.LowPass < band.High)
                {
                    warnings.Add($"{both}: part of its noise was taken out before, so that noise and trials are too low; record with a wider band, or narrow the response's");
                }
            }
        }
    }

    private static void CheckSignals(EdfHeader header, int[] wanted, Recording recording, List<string> warnings)
    {
        var limited = new List<string>();
        for (int c = 0; c < wanted.Length; c++)
        {
            EdfSignal signal = header.Signals[wanted[c]];
            double first = recording.Stretches[0].Values[c][0];
            if (recording.Stretches.All(s => Array.TrueForAll(s.Values[c], v => v == first)))
            {
                throw new InputException(header.DisplayName, signal.Name, Invariant($"is flat: every sample is {Si.ToMicrovolts(first):0.###} uV. A broken channel is left out of the study; the recording's own reference is stated under {Key}.reference"));
            }

            if (recording.AtLimit[c] > 0)
            {
                limited.Add(Invariant($"{signal.Label} ({recording.AtLimit[c]} samples)"));
            }
        }

        if (limited.Count > 0)
        {
            warnings.Add($"{header.DisplayName}: samples stand at the end of the digital range and may be clipped in {string.Join(", ", limited)}; choose a part without");
        }
    }

    private static void Judge(StudyReading reading, RecordedNoise noise, string responses, int electrodes, List<string> warnings)
    {
        double usual = Si.ToMicrovolts(DefaultNoiseTables.EegTotal.Rms(noise.Band.Low, noise.Band.High));
        NoiseAssembly.Judge(reading, warnings, Key, Rounded(Si.ToMicrovolts(noise.MedianRms)), Rounded(0.3 * usual), Rounded(3 * usual), "uV",
            $"over the band of {responses} the rms of the median electrode against the average,");
        if (noise.RejectedShare > MuchRejected)
        {
            warnings.Add(Invariant($"{Key}: {100 * noise.RejectedShare:0} % of the segments exceed the limit of limit_uV over the band of {responses}; is protocol.rejected_fraction as high?"));
        }

        if (noise.IndependentSamples <= electrodes)
        {
            warnings.Add(Invariant($"{Key}: {noise.IndependentSamples:0} independent samples for {electrodes} electrodes over the band of {responses}: most of the covariance's pattern is the assumption of equal variance; record longer"));
        }

        if (noise.HeldOutShare < GoodShare)
        {
            warnings.Add(Invariant($"{Key}: over the band of {responses} filters built from one half of the baseline reach {100 * noise.HeldOutShare:0} % of the power that they promise on the other half; matched-filter figures carry that factor and stay an estimate: record longer, or under steadier conditions"));
        }
    }

    private static double Rounded(double value) => double.Parse(value.ToString("G4", CultureInfo.InvariantCulture), CultureInfo.InvariantCulture);
}
