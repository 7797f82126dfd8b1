using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Leadfields.Voxels;

/// <summary>The nodes whose transfer rows are kept, ascending.</summary>
/// <remarks>
/// By default every node of source tissue, so that a changed region, response or protocol finds its rows. Where those exceed the budget, only the nodes that given
/// dipoles use: then other dipoles need other rows. Immutable.
/// </remarks>
public sealed class KeptNodes
{
    private readonly int[] _nodes, _rowOf;

    private KeptNodes(int meshNodes, int[] nodes, bool all)
    {
        (_nodes, HoldsAll) = (nodes, all);
        _rowOf = new int[meshNodes];
        Array.Fill(_rowOf, -1);
        for (int row = 0; row < nodes.Length; row++)
        {
            _rowOf[nodes[row]] = row;
        }
    }

    /// <summary>Number of kept nodes.</summary>
    public int Count => _nodes.Length;

    /// <summary>True where every node of source tissue is kept.</summary>
    public bool HoldsAll { get; }

    /// <summary>The kept nodes, ascending.</summary>
    public ReadOnlySpan<int> Nodes => _nodes;

    /// <summary>Every node that an element of source tissue touches.</summary>
    public static KeptNodes All(SourceTissue tissue)
    {
        int count = tissue.Mesh.Nodes.Count;
        return new(count, [.. Enumerable.Range(0, count).Where(tissue.Touches)], all: true);
    }

    /// <summary>The nodes that dipoles at given places [m] use.</summary>
    /// <exception cref="ArgumentOutOfRangeException">A place is not in source tissue.</exception>
    public static KeptNodes NeededBy(DipoleLoad load, IEnumerable<Vec3> positions)
    {
        int count = load.Tissue.Mesh.Nodes.Count;
        var used = new bool[count];
        var nodes = new int[DipoleLoad.MostNodes];
        var weights = new Vec3[DipoleLoad.MostNodes];
        foreach (Vec3 position in positions)
        {
            int taken = load.Place(position, nodes, weights, out _);
            foreach (int node in nodes.AsSpan(0, taken))
            {
                used[node] = true;
            }
        }

        return new(count, [.. Enumerable.Range(0, count).Where(n => used[n])], all: false);
    }

    /// <summary>All nodes of source tissue where their rows fit, else those that the dipoles use.</summary>
    /// <param name="load">Load of the dipoles.</param>
    /// <param name="sensors">Number of sensors.</param>
    /// <param name="budgetBytes">Most memory that rows may take.</param>
    /// <param name="positions">Places of every dipole of the study [m]; looked at only where not all nodes fit.</param>
    public static KeptNodes Within(DipoleLoad load, int sensors, long budgetBytes, IEnumerable<Vec3> positions)
    {
        KeptNodes all = All(load.Tissue);
        return TransferRows.BytesFor(all.Count, sensors) <= budgetBytes ? all : NeededBy(load, positions);
    }

    /// <summary>The row of a node of the mesh; -1 where it is not kept.</summary>
    public int RowOf(int node) => _rowOf[node];
}
