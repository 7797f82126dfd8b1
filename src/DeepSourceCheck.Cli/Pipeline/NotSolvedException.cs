using DeepSourceCheck.Core.Numerics.Multigrid;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>The finite elements of a head were not solved for some sensors: which, how far, why it may be, and what to do.</summary>
internal sealed class NotSolvedException : Exception
{
    private const int MostNames = 5;

    /// <param name="labels">The head's label volume.</param>
    /// <param name="sensors">The sensors, the worst first.</param>
    /// <param name="cause">What the solver says.</param>
    public NotSolvedException(string labels, IReadOnlyList<string> sensors, NoConvergenceException cause)
        : base(FormattableString.Invariant(
            $"the finite elements on {labels} were not solved for {Names(sensors)}: relative residual {cause.Residual:0.0e+0} after {cause.Iterations} cycles, {cause.Tolerance:0.0e+0} was asked for. ")
            + "Likely causes: conductivities that differ by more than a factor of a million, a tensor that hardly conducts along an axis, or voxels more than about five times as long as wide. "
            + "Look at conductivity_S_per_m and tensors in head.voxels, resample the volume to voxels of about equal sides, or set `grid: plain`; nothing was written",
            cause)
    {
    }

    private static string Names(IReadOnlyList<string> sensors) =>
        string.Join(", ", sensors.Take(MostNames)) + (sensors.Count > MostNames ? FormattableString.Invariant($" and {sensors.Count - MostNames} more") : "");
}
