using DeepSourceCheck.Core.Planning;
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

    /// <summary>Predicted peak memory [bytes].</summary>
    public static long Memory(StudySetup setup, Purpose purpose)
    {
        long dipoles = setup.Regions.Sum(r => (long)r.Positions.Length);
        long rows = setup.Source.EegRows + setup.Source.MegRows;
        long bytes = Base + dipoles * BytesADipole + rows * rows * 8 * 4;
        if (purpose == Purpose.Leadfield)
        {
            return bytes + dipoles * rows * 24;
        }

        long largest = setup.Regions.Count == 0 ? 0 : setup.Regions.Max(r => (long)r.Positions.Length);
        return bytes + Math.Min(largest * 256, Core.Detection.QuantileStore.ExactLimit) * BytesAPercentileStore * 30;
    }

    /// <summary>Predicted time [s] on this machine's processors.</summary>
    public static double Seconds(StudySetup setup, Purpose purpose)
    {
        double dipoles = purpose == Purpose.Leadfield
            ? setup.Regions.Sum(r => (long)r.Positions.Length)
            : setup.Study.Responses.Sum(r => r.Regions.Sum(name => (long)setup.Region(name).Positions.Length));
        double rows = setup.Source.EegRows + setup.Source.MegRows;
        double work = dipoles * rows * SecondsADipoleAndRow;
        if (purpose == Purpose.Assess)
        {
            work += dipoles * 300 * (rows * SecondsAReading + 10 * SecondsADirection);
        }

        return BaseSeconds + work / Environment.ProcessorCount;
    }
}
