using DeepSourceCheck.Cli.Pipeline;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Spheres;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Tests.Cli.Pipeline;

/// <summary>
/// A head of voxels that holds a layered sphere, computed with the sphere's own series: whatever differs between a study on it and the same study on spheres comes from the stages around the
/// leadfield, which must not know which head they have.
/// </summary>
internal sealed class StandInParts(LayeredSphere sphere) : IVoxelSensors, IVoxelSolver
{
    public List<VoxelProblem> Solved { get; } = [];

    /// <summary>Called with the number of a solution, from 0, and its leadfields.</summary>
    public Action<int, ILeadfieldSource> OnSolved { get; set; } = (_, _) => { };

    /// <summary>The head that was built last.</summary>
    public BuiltVoxelHead? Built { get; private set; }

    public VoxelParts Parts => new(
        (built, _) =>
        {
            Built = built;
            return this;
        },
        (_, _) => this);

    public IReadOnlyList<string> Warnings => ["the stand-in placed the sensors"];

    public IReadOnlyList<Vec3> Sites(IReadOnlyList<string> names) => [.. names.Select(n => sphere.Centre + sphere.OuterRadius * ElectrodeLayout.Direction(n))];

    public IReadOnlyList<Electrode> Project(IReadOnlyList<string> names, IReadOnlyList<Vec3> positions, string file) => ElectrodePlacement.OnSphere(names, positions, sphere, file);

    public IReadOnlyList<MegChannel> Array(CoilArrayChoice choice) => CoilArray.Generate(choice, sphere.Centre, sphere.OuterRadius);

    public Vec3 Centre => sphere.Centre;

    public string Describe(CoilArrayChoice choice) => "the stand-in's array lies on a sphere";

    public void CheckCoils(IReadOnlyList<MegChannel> channels, string file) => SphereLeadfield.CheckCoils(sphere, channels, file);

    public ILeadfieldSource Solve(VoxelProblem problem, RunSettings settings, List<string> warnings)
    {
        Solved.Add(problem);
        var source = new SphereLeadfield(sphere, problem.Electrodes, problem.Channels);
        OnSolved(Solved.Count - 1, source);
        return source;
    }

    // As if dipoles shared no nodes.
    public int KeptNodes(VoxelProblem problem) => 27 * problem.Places.Count;
}
