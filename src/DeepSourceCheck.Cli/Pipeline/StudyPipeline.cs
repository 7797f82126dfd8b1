using System.Reflection;

using DeepSourceCheck.Core.Planning;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Files.Regions;
using DeepSourceCheck.Files.Studies;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>The flow from a study file to its results, on one page.</summary>
internal static class StudyPipeline
{
    /// <summary>Version of the program.</summary>
    public static string Version { get; } =
        typeof(StudyPipeline).Assembly.GetCustomAttribute<AssemblyInformationalVersionAttribute>()?.InformationalVersion ?? "0";

    /// <summary>Reads and validates everything that the purpose needs.</summary>
    /// <param name="studyPath">Study file; null: the embedded default.</param>
    /// <param name="purpose">What the study is read for.</param>
    /// <param name="settings">Budget, cancellation.</param>
    /// <exception cref="InputException">The input is wrong.</exception>
    public static PreparedStudy Prepare(string? studyPath, Purpose purpose, RunSettings settings)
    {
        settings.Progress?.Invoke("reading", 0);
        RegionLibrary library = RegionLibrary.Load();
        StudyReading reading = studyPath is null ? DefaultStudy.Read(purpose, library.Names) : StudyReader.Read(studyPath, purpose, library.Names);
        PreparedStudy study = Prepare(reading, library, purpose, settings);
        var variants = new List<PreparedVariant>();
        foreach (VariantReading variant in purpose == Purpose.Assess ? reading.Variants : [])
        {
            // Checked now, solved for when its turn comes: the rows of several heads of voxels would not fit side by side.
            PreparedStudy Own(RunSettings own) => Named(variant, () => Prepare(variant.Reading, library, purpose, own));
            variants.Add(new PreparedVariant(variant.Name, Own(settings with { CheckOnly = true, Progress = null }), Own));
        }

        return study.With(variants);
    }

    // What is wrong with a variant says whose it is, whenever it shows.
    private static PreparedStudy Named(VariantReading variant, Func<PreparedStudy> prepare)
    {
        try
        {
            return prepare();
        }
        catch (InputException error)
        {
            throw new InputException([.. error.Problems.Select(p => p with { Message = variant.Reading.Attributed(p.Message) })]);
        }
    }

    private static PreparedStudy Prepare(StudyReading reading, RegionLibrary library, Purpose purpose, RunSettings settings)
    {
        var inputs = new InputDigests(reading);
        var warnings = new List<string>(reading.Warnings);
        settings.Cancellation.ThrowIfCancellationRequested();

        SensorAssembly sensors = SensorAssembly.Build(reading, inputs, purpose, settings, warnings);
        settings.Cancellation.ThrowIfCancellationRequested();
        var regions = new RegionAssembly(reading, library, sensors, inputs, purpose, settings);
        warnings.AddRange(regions.Warnings);
        sensors.Compute(regions.Filled, settings);
        StudySetup setup = sensors.Setup(reading.Study, regions.Filled);
        if (purpose == Purpose.Assess)
        {
            warnings.AddRange(MomentCheck.Judge(reading, setup));
            setup = NoiseAssembly.Build(reading, sensors, setup, inputs, warnings);
        }

        LeadfieldCost cost = sensors.Cost(regions.Filled);
        return new PreparedStudy
        {
            Reading = reading,
            Setup = setup,
            Inputs = inputs.Files,
            Warnings = [.. warnings.Distinct()],
            PredictedMemory = Prediction.Memory(setup, purpose) + cost.Bytes,
            PredictedSeconds = Prediction.Seconds(setup, purpose) + cost.Seconds,
        };
    }

    /// <summary>Computes the assessment; dipole results stream into the sink.</summary>
    /// <exception cref="InputException">A predicted amplitude is too large to be meant.</exception>
    public static Assessment Assess(PreparedStudy prepared, RunSettings settings, IDipoleSink? dipoles)
    {
        Assessment study = AssessOne(prepared, settings, dipoles);
        List<VariantResult> variants = [];
        foreach (PreparedVariant variant in prepared.Variants)
        {
            Action<string, double>? progress = settings.Progress is { } told ? (stage, done) => told($"{variant.Name}: {stage}", done) : null;
            RunSettings own = settings with { Progress = progress };
            variants.Add(new VariantResult(variant.Name, AssessOne(variant.Prepare(own), own, null)));
        }

        return study with { Variants = variants, Inputs = [.. study.Inputs.Concat(variants.SelectMany(v => v.Assessment.Inputs)).DistinctBy(f => f.Path)] };
    }

    private static Assessment AssessOne(PreparedStudy prepared, RunSettings settings, IDipoleSink? dipoles)
    {
        IReadOnlyList<ResponseResult> responses = Assessor.Assess(prepared.Setup, dipoles, settings.Progress, settings.Cancellation);
        IReadOnlyList<string> amplitudes = [.. MomentCheck.JudgeFound(prepared.Reading, prepared.Setup, responses), .. AmplitudeCheck.Judge(prepared.Reading, responses)];
        return new Assessment
        {
            Study = prepared.Study,
            Version = Version,
            Inputs = prepared.Inputs,
            Assumptions = [.. prepared.Assumptions, .. FoundMoments(responses)],
            Warnings = [.. amplitudes.Concat(prepared.Warnings).Concat(responses.SelectMany(r => r.Regions).SelectMany(r => r.Warnings)).Distinct()],
            Responses = responses,
            SessionTrials = SessionPlan.Trials(prepared.Study.Protocol),
            Leadfields = prepared.Setup.Source.Method,
            Limits = prepared.Setup.Limits,
            Scene = prepared.Setup.Scene,
        };
    }

    private static IEnumerable<Assumption> FoundMoments(IReadOnlyList<ResponseResult> responses) =>
        from response in responses
        where response.Response.Amplitude is not null
        from region in response.Regions
        select new Assumption($"{response.Response.Key}.moment_nAm ({region.Region})", Si.ToNanoAmpereMetres(region.Moment), "nAm", FromStudy: false,
            $"found from the stated amplitude at {response.Response.Amplitude!.Derivation} through the leadfield: the median over dipoles and directions reads it", Grade.Derived);

    /// <summary>Writes the leadfields of every region into a folder that exists.</summary>
    public static void WriteLeadfield(PreparedStudy prepared, string folder, RunSettings settings) => LeadfieldWriter.Write(prepared, folder, settings);
}
