using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Voxels;
using DeepSourceCheck.Core.Planning;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Files.Studies;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>A variant of a study, likewise.</summary>
/// <param name="Name">Its name.</param>
/// <param name="Memory">Predicted peak memory [bytes].</param>
/// <param name="Seconds">Predicted time [s].</param>
/// <param name="Prepare">Prepares it for its run as a study of its own, without variants; it was checked.</param>
internal sealed record PreparedVariant(string Name, long Memory, double Seconds, Func<RunSettings, PreparedStudy> Prepare);

/// <summary>A study that was read and found sound, with all of its parts built.</summary>
internal sealed record PreparedStudy
{
    /// <summary>The study as read, with the places of its keys.</summary>
    public required StudyReading Reading { get; init; }

    /// <summary>The study's parts.</summary>
    public required StudySetup Setup { get; set; }

    /// <summary>Files that were read.</summary>
    public required IReadOnlyList<InputFile> Inputs { get; init; }

    /// <summary>The study.</summary>
    public Study Study => Reading.Study;

    /// <summary>Warnings, gravest first.</summary>
    public required IReadOnlyList<string> Warnings { get; init; }

    /// <summary>Every value that enters.</summary>
    public IReadOnlyList<Assumption> Assumptions => [.. Reading.Assumptions, .. Found];

    /// <summary>Values that were read off the study's files.</summary>
    public IReadOnlyList<Assumption> Found { get; init; } = [];

    /// <summary>Electrodes in use.</summary>
    public int Electrodes => Setup.Source.EegRows;

    /// <summary>MEG channels in use.</summary>
    public int MegChannels => Setup.MegReported ? Setup.MegNames.Count : 0;

    /// <summary>Dipoles in all regions.</summary>
    public long Dipoles => Setup.Regions.Sum(r => (long)r.Positions.Length);

    /// <summary>Regions with their dipoles and spacing [mm]; null for points.</summary>
    public IReadOnlyList<(string Region, long Dipoles, double? SpacingMm)> Regions =>
        [.. Setup.Regions.Select(r => (r.Name, (long)r.Positions.Length, r.Spacing is { } h ? Si.ToMm(h) : (double?)null))];

    /// <summary>Predicted peak memory [bytes].</summary>
    public required long PredictedMemory { get; init; }

    /// <summary>Predicted time [s].</summary>
    public required double PredictedSeconds { get; init; }

    /// <summary>The study's variants, in its order.</summary>
    public IReadOnlyList<PreparedVariant> Variants { get; private init; } = [];

    /// <summary>The study with its variants: they run one after the other, each when the leadfields of the one before are gone.</summary>
    public PreparedStudy With(IReadOnlyList<PreparedVariant> variants) => variants.Count == 0 ? this : this with
    {
        Variants = variants,
        PredictedMemory = Math.Max(PredictedMemory, variants.Max(v => v.Memory)),
        PredictedSeconds = PredictedSeconds + variants.Sum(v => v.Seconds),
    };

    /// <summary>Gives up the leadfields: the rows of a head of voxels take up to a gibibyte, which the next head needs. Counts stay.</summary>
    public void ReleaseLeadfields()
    {
        if (Setup.Source is ReleasedLeadfield)
        {
            return;
        }

        bool large = Setup.Source is VoxelLeadfield or ProjectedSource { Inner: VoxelLeadfield };
        // The functions are those of the sensors, which hold the leadfields too.
        Setup = Setup with { Source = new ReleasedLeadfield(Setup.Source), Removal = null, FieldCaptured = _ => null, CentreSensitivity = (_, _) => null };
        if (large)
        {
            // Left alone, the collector may not look before the next head has taken as much again.
            GC.Collect();
        }
    }

    private sealed class ReleasedLeadfield(ILeadfieldSource of) : ILeadfieldSource
    {
        public int EegRows { get; } = of.EegRows;

        public int MegRows { get; } = of.MegRows;

        public LeadfieldMethod Method { get; } = of.Method;

        public void Fill(LeadfieldBlock block) => throw new InvalidOperationException("A leadfield was asked for after it was given up.");
    }
}
