using System.Globalization;

using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Voxels;
using DeepSourceCheck.Core.Numerics.Multigrid;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Leadfields;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>Transfer rows of one head: from the cache, or solved for and kept there. Mesh and matrix are built once, the matrix only where something must be solved.</summary>
internal sealed class RowSolver : IVoxelSolver
{
    // Most memory of the rows of all nodes that a source could use; beyond it rows are kept for the study's own dipoles alone, and other dipoles need other rows.
    public const long MostRowBytes = 1L << 30;

    private readonly ConductivityTensors? _tensors;
    private readonly HexMesh _mesh;
    private readonly DipoleLoad _load;
    private readonly SolveSettings _settings;
    private readonly string _labels;
    private VoxelSolver? _solver;

    /// <param name="built">The head.</param>
    /// <param name="choice">Grid and load of the dipole.</param>
    /// <param name="settings">When a solution counts as found; null for the default.</param>
    public RowSolver(BuiltVoxelHead built, VoxelHeadChoice choice, SolveSettings? settings = null)
    {
        (_tensors, _settings, _labels) = (built.Tensors, settings ?? SolveSettings.Default, choice.Labels);
        HexMesh plain = HexMesh.Plain(built.Head.Volume);
        _mesh = choice.Adapted ? AdaptedNodes.Adapt(plain) : plain;
        _load = DipoleLoad.Of(choice.DipoleLoad == DipoleLoadName.Monopoles ? DipoleLoadKind.Monopoles : DipoleLoadKind.ElementGradient, new SourceTissue(_mesh));
    }

    /// <inheritdoc/>
    public ILeadfieldSource Solve(VoxelProblem problem, RunSettings settings, List<string> warnings)
    {
        KeptNodes kept = Kept(problem);
        var rows = new TransferRows(kept, problem.Electrodes.Count, problem.Channels.Count);
        string key = RowKey.Of(_mesh, _tensors, problem.Electrodes, problem.Channels, kept, _settings.ToString());
        var cache = new RowCache(settings.CacheFolder ?? RowCache.DefaultFolder());
        settings.Progress?.Invoke($"{problem.What}: looking for rows", 0);
        if (!cache.TryRead(key, rows, out RowFigures figures, out string? trouble))
        {
            Note(warnings, trouble);
            SolveReport report = Solve(problem, rows, settings);
            settings.Cancellation.ThrowIfCancellationRequested();
            figures = new(report.MostIterations, report.WorstResidual);
            Note(warnings, cache.TryWrite(key, rows, figures));
        }

        return new VoxelLeadfield(rows, _load, problem.Channels, figures);
    }

    /// <inheritdoc/>
    int IVoxelSolver.KeptNodes(VoxelProblem problem) => Kept(problem).Count;

    private KeptNodes Kept(VoxelProblem problem) => problem.Reusable
        ? KeptNodes.Within(_load, problem.Electrodes.Count + problem.Channels.Count, MostRowBytes, problem.Places)
        : KeptNodes.NeededBy(_load, problem.Places);

    private SolveReport Solve(VoxelProblem problem, TransferRows rows, RunSettings settings)
    {
        try
        {
            return Solver(problem, settings).Solve(
                new SensorLoads(new ElectrodeLoad(_mesh, problem.Electrodes), new CoilLoad(_mesh, problem.Channels, _tensors)),
                rows.Take, Threads,
                settings.Progress is { } told ? share => told(problem.What, share) : null, settings.Cancellation);
        }
        catch (NoConvergenceException error)
        {
            throw new NotSolvedException(_labels, [.. error.RightHandSides.Select(problem.Sensor)], error);
        }
    }

    private static int Threads => Environment.ProcessorCount;

    private VoxelSolver Solver(VoxelProblem problem, RunSettings settings)
    {
        settings.Progress?.Invoke($"{problem.What}: setting up", 0);
        settings.Cancellation.ThrowIfCancellationRequested();
        return _solver ??= new VoxelSolver(_mesh, _tensors, _settings, Threads);
    }

    private static void Note(List<string> warnings, string? trouble)
    {
        if (trouble is not null)
        {
            warnings.Add(string.Create(CultureInfo.InvariantCulture, $"row cache: {trouble}"));
        }
    }
}
