using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Studies;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>What a run will take, for `check` and the memory budget. Rough: within a factor of two or three.</summary>
internal static class Prediction
{
    // Runtime, libraries and figures; then what each part holds [bytes]. Measured on the default study and on 300,000 dipoles.
    private const long Base = 150_000_000;
    private const long BytesADipole = 200;
    private const long BytesAPercentileStore = 8;

    // Seconds: start and report; then a dipole and row of leadfield, and a dipole, row and direction of readings, on one processor.
    private const double BaseSeconds = 1.5, SecondsADipoleAndRow = 2e-8, SecondsAReading = 4e-10, SecondsADirection = 4e-8;

    /// <summary>Predicted peak memory [bytes], leadfields of heads of voxels apart.</summary>
    /// <param name="regions">The filled regions.</param>
    /// <param name="rows">Electrodes and MEG channels.</param>
    /// <param name="purpose">What is computed.</param>
    public static long Memory(IReadOnlyList<FilledRegion> regions, long rows, Purpose purpose)
    {
        long dipoles = regions.Sum(r => (long)r.Positions.Length);
        long bytes = Base + dipoles * BytesADipole + rows * rows * 8 * 4;
        if (purpose == Purpose.Leadfield)
        {
            return bytes + dipoles * rows * 24;
        }

        long largest = regions.Count == 0 ? 0 : regions.Max(r => (long)r.Positions.Length);
        return bytes + Math.Min(largest * 256, Core.Detection.QuantileStore.ExactLimit) * BytesAPercentileStore * 30;
    }

    /// <summary>Predicted time [s] on this machine's processors, likewise.</summary>
    /// <param name="study">The study.</param>
    /// <param name="regions">The filled regions.</param>
    /// <param name="rows">Electrodes and MEG channels.</param>
    /// <param name="purpose">What is computed.</param>
    public static double Seconds(Study study, IReadOnlyList<FilledRegion> regions, long rows, Purpose purpose)
    {
        double dipoles = purpose == Purpose.Leadfield
            ? regions.Sum(r => (long)r.Positions.Length)
            : study.Responses.Sum(r => r.Regions.Sum(name => (long)regions.First(region => region.Name == name).Positions.Length));
        double work = dipoles * rows * SecondsADipoleAndRow;
        if (purpose == Purpose.Assess)
        {
            work += dipoles * 300 * (rows * SecondsAReading + 10 * SecondsADirection);
        }

        return BaseSeconds + work / Environment.ProcessorCount;
    }
}
