namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>How a run goes, apart from what is computed.</summary>
/// <param name="MemoryBudget">Memory [bytes] against which the run is refused; null: none was stated.</param>
/// <param name="Without">Parts of the result that are left out: dipoles, figures, report, maps.</param>
/// <param name="Progress">Told the stage and the fraction of it that is done, 0 to 1; from any thread. Null: nobody watches.</param>
/// <param name="Cancellation">Ends the run.</param>
internal sealed record RunSettings(long? MemoryBudget, IReadOnlySet<string> Without, Action<string, double>? Progress, CancellationToken Cancellation)
{
    /// <summary>True: nothing costly is computed; the study is read, checked and its cost predicted.</summary>
    public bool CheckOnly { get; init; }

    /// <summary>Folder in which the rows of voxel heads are kept; null: the user's own cache.</summary>
    public string? CacheFolder { get; init; }

    /// <summary>What heads of voxels are computed with.</summary>
    public VoxelParts VoxelParts { get; init; } = VoxelParts.Own;
}
