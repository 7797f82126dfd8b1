using System.Reflection;
using System.Runtime.CompilerServices;

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

    /// <summary>Reads and validates everything that the purpose needs. Heads of voxels are solved for last: when nothing speaks against the study or its variants, and they fit.</summary>
    /// <param name="studyPath">Study file; null: the embedded default.</param>
    /// <param name="purpose">What the study is read for.</param>
    /// <param name="settings">Budget, cancellation.</param>
    /// <exception cref="InputException">The input is wrong, or the run would not fit into the budget.</exception>
    /// <exception cref="NotSolvedException">The equations of a head were not solved.</exception>
    public static PreparedStudy Prepare(string? studyPath, Purpose purpose, RunSettings settings)
    {
        settings.Progress?.Invoke("reading", 0);
        RegionLibrary library = RegionLibrary.Load();
        StudyReading reading = studyPath is null ? DefaultStudy.Read(purpose, library.Names) : StudyReader.Read(studyPath, purpose, library.Names);
        var study = new StudyPlan(reading, library, purpose, settings);
        var variants = new List<PreparedVariant>();
        foreach (VariantReading variant in purpose == Purpose.Assess ? reading.Variants : [])
        {
            // Checked now, built again and solved for when its turn comes: several heads of voxels would not fit side by side.
            StudyPlan Plan(RunSettings own) => Named(variant, () => new StudyPlan(variant.Reading, library, purpose, own));
            StudyPlan plan = Plan(settings with { Progress = null });
            variants.Add(new PreparedVariant(variant.Name, plan.Memory, plan.Seconds, own => Named(variant, () => Plan(own).Prepare(own))));
        }

        long memory = variants.Select(v => v.Memory).Append(study.Memory).Max();
        if (settings.MemoryBudget is { } limit && memory > limit)
        {
            throw new InputException(reading.Study.File, null,
                $"the run would need about {MemorySize.Rough(memory)}, more than the {MemorySize.Rough(limit)} that --memory allows; a wider spacing_mm or fewer regions need less");
        }

        return study.Prepare(settings).With(variants);
    }

    // What is wrong with a variant says whose it is, whenever it shows.
    private static T Named<T>(VariantReading variant, Func<T> prepare)
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

    /// <summary>Computes the assessment; dipole results stream into the sink. A study with variants gives up its leadfields on the way, and is assessed once.</summary>
    /// <exception cref="InputException">A predicted amplitude is too large to be meant.</exception>
    public static Assessment Assess(PreparedStudy prepared, RunSettings settings, IDipoleSink? dipoles)
    {
        Assessment study = AssessOne(prepared, settings, dipoles);
        List<VariantResult> variants = [];
        foreach (PreparedVariant variant in prepared.Variants)
        {
            Action<string, double>? progress = settings.Progress is { } told ? (stage, done) => told($"{variant.Name}: {stage}", done) : null;
            RunSettings own = settings with { Progress = progress };
            prepared.ReleaseLeadfields();
            variants.Add(new VariantResult(variant.Name, AssessVariant(variant, own)));
        }

        return study with { Variants = variants, Inputs = [.. study.Inputs.Concat(variants.SelectMany(v => v.Assessment.Inputs)).DistinctBy(f => f.Path)] };
    }

    // A frame of its own: nothing of one variant is held while the next one is solved for.
    [MethodImpl(MethodImplOptions.NoInlining)]
    private static Assessment AssessVariant(PreparedVariant variant, RunSettings settings)
    {
        PreparedStudy study = variant.Prepare(settings);
        Assessment assessment = AssessOne(study, settings, null);
        study.ReleaseLeadfields();
        return assessment;
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
            Assumptions = [.. prepared.Assumptions, .. FoundMoments(responses), .. KeptPeaks(responses)],
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

    private static IEnumerable<Assumption> KeptPeaks(IReadOnlyList<ResponseResult> responses) =>
        from response in responses
        where response.Waveform is not null
        select new Assumption($"{response.Response.Key} (peak that filter and jitter leave)", response.Waveform!.Kept, "", FromStudy: false,
            FormattableString.Invariant($"{response.Waveform.Description}; latency jitter {response.Waveform.Jitter * 1000:0.######} ms")
            + (response.Waveform.Energy is null ? "" : "; rectangular filter, the response's band"), Grade.Derived);

    /// <summary>Writes the leadfields of every region into a folder that exists.</summary>
    public static void WriteLeadfield(PreparedStudy prepared, string folder, RunSettings settings) => LeadfieldWriter.Write(prepared, folder, settings);
}
