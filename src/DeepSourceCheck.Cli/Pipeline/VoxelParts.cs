using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Voxels;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>Places sensors about one real head.</summary>
internal interface IVoxelSensors
{
    /// <summary>Places [m] of sites of the 10-5 system, M1 and M2 on the scalp.</summary>
    /// <param name="names">Names of sites, all known.</param>
    /// <exception cref="InputException">The landmarks do not suit the head.</exception>
    IReadOnlyList<Vec3> Sites(IReadOnlyList<string> names);

    /// <summary>Sets measured positions on the scalp; contacts within the head stay where they are.</summary>
    /// <param name="names">Names of the electrodes.</param>
    /// <param name="positions">Their positions [m].</param>
    /// <param name="file">Table that they come from, for messages.</param>
    /// <exception cref="InputException">Names every electrode farther than 20 mm from the scalp, with the distance.</exception>
    IReadOnlyList<Electrode> Project(IReadOnlyList<string> names, IReadOnlyList<Vec3> positions, string file);

    /// <summary>A generated array about the head, at the stated gap from the scalp.</summary>
    IReadOnlyList<MegChannel> Array(CoilArrayChoice choice);

    /// <summary>The point that directions and elevations are seen from [m].</summary>
    Vec3 Centre { get; }

    /// <summary>One sentence on where a generated array lies.</summary>
    string Describe(CoilArrayChoice choice);

    /// <summary>Refuses coils that do not lie in the air around the head.</summary>
    /// <param name="channels">Channels of a table.</param>
    /// <param name="file">The table, for messages.</param>
    /// <exception cref="InputException">Names every such channel, with the depth.</exception>
    void CheckCoils(IReadOnlyList<MegChannel> channels, string file);

    /// <summary>What the user must know: which landmarks were found rather than given, with their uncertainty; how far electrodes were moved. Asked for last.</summary>
    IReadOnlyList<string> Warnings { get; }
}

/// <summary>What the finite elements of one head are solved for.</summary>
/// <param name="What">What it is, for progress.</param>
/// <param name="Electrodes">Electrodes; may be empty.</param>
/// <param name="Channels">MEG channels; may be empty.</param>
/// <param name="Places">Where dipoles will stand [m].</param>
/// <param name="Reusable">True: rows of every node that a source could use are kept, as far as they fit, so that other regions find them too; else those that the places need.</param>
internal sealed record VoxelProblem(
    string What, IReadOnlyList<Electrode> Electrodes, IReadOnlyList<MegChannel> Channels, IReadOnlyList<Vec3> Places, bool Reusable)
{
    /// <summary>Name of the sensor of a right-hand side: electrodes, then channels.</summary>
    public string Sensor(int rightHandSide) => rightHandSide < Electrodes.Count ? Electrodes[rightHandSide].Name : Channels[rightHandSide - Electrodes.Count].Name;
}

/// <summary>Solves a row for every sensor of one head, or takes it from the cache.</summary>
internal interface IVoxelSolver
{
    /// <summary>Leadfields at the problem's places, unreferenced.</summary>
    /// <param name="problem">Sensors and places.</param>
    /// <param name="settings">Cache, progress, cancellation.</param>
    /// <param name="warnings">Receives trouble with the cache.</param>
    /// <exception cref="NotSolvedException">The equations of some sensors were not solved.</exception>
    ILeadfieldSource Solve(VoxelProblem problem, RunSettings settings, List<string> warnings);

    /// <summary>Nodes whose rows the problem keeps, number of; nothing is solved.</summary>
    /// <param name="problem">Sensors and places.</param>
    int KeptNodes(VoxelProblem problem);
}

/// <summary>What a head of voxels needs beside its volume.</summary>
/// <param name="Sensors">Makes the sensors' placement for a head and the landmarks that the study gives [m].</param>
/// <param name="Solver">Makes the solver of a head.</param>
internal sealed record VoxelParts(Func<BuiltVoxelHead, IReadOnlyDictionary<string, Vec3>, IVoxelSensors> Sensors, Func<BuiltVoxelHead, VoxelHeadChoice, IVoxelSolver> Solver)
{
    /// <summary>Values of rows that are kept at most: nodes times sensors, sensors in sixteens.</summary>
    public long MostRowValues { get; init; } = TransferRows.MostValues;

    /// <summary>The program's own.</summary>
    public static VoxelParts Own { get; } = new((built, landmarks) => new ScalpSensors(built, landmarks), (built, choice) => new RowSolver(built, choice));
}
