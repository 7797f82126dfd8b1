using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Leadfields;

/// <summary>Computes or looks up leadfields, a block of dipoles at a time, unreferenced.</summary>
/// <remarks>Immutable after construction; <see cref="Fill"/> may run on several threads at once, each with its own block.</remarks>
public interface ILeadfieldSource
{
    /// <summary>Number of electrodes; 0 without EEG.</summary>
    int EegRows { get; }

    /// <summary>Number of MEG channels; 0 without MEG.</summary>
    int MegRows { get; }

    /// <summary>How its values come about.</summary>
    LeadfieldMethod Method { get; }

    /// <summary>Step [m] over which its values change smoothly with place, for differences; null where it knows no places between its points.</summary>
    double? PositionStep => null;

    /// <summary>Overwrites the block's EEG and MEG values at its loaded positions.</summary>
    void Fill(LeadfieldBlock block);

    /// <summary>Counts what carries dipoles at places [m]; null where all are carried alike. On all processors, the same whatever their number.</summary>
    /// <param name="positions">Places of dipoles.</param>
    /// <param name="cancellation">Stops the count.</param>
    SupportCounts? Supports(ReadOnlyMemory<Vec3> positions, CancellationToken cancellation) => null;
}
