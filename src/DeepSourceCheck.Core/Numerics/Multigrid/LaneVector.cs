using System.Runtime.InteropServices;

namespace DeepSourceCheck.Core.Numerics.Multigrid;

/// <summary>Sixteen numbers a node, interleaved, aligned to 64 bytes, with room on either side that neighbours outside the grid may read.</summary>
/// <remarks>Outside the garbage collector, so that hundreds of megabytes go back to the system when a solve ends. Zero at first.</remarks>
internal sealed unsafe class LaneVector : IDisposable
{
    private void* _memory;

    public LaneVector(RowGrid grid)
        : this(grid.Count, grid.Nx + 2)
    {
    }

    public LaneVector(int nodes, int margin)
    {
        Nodes = nodes;
        nuint bytes = (nuint)BytesOf(nodes, margin);
        _memory = NativeMemory.AlignedAlloc(bytes, 4096);
        NativeMemory.Clear(_memory, bytes);
        GC.AddMemoryPressure((long)bytes);
        Bytes = (long)bytes;
        At = (float*)_memory + (nint)margin * ILoadBlocks.Lanes;
    }

    ~LaneVector() => Free();

    /// <summary>Nodes.</summary>
    public int Nodes { get; }

    /// <summary>Memory [bytes].</summary>
    public long Bytes { get; }

    /// <summary>Lane 0 of node 0.</summary>
    public float* At { get; }

    /// <summary>All lanes of all nodes.</summary>
    public Span<float> Span => new(At, checked(Nodes * ILoadBlocks.Lanes));

    /// <summary>Memory [bytes] of a vector.</summary>
    public static long BytesOf(int nodes, int margin) => (nodes + 2L * margin) * ILoadBlocks.Lanes * sizeof(float);

    /// <inheritdoc/>
    public void Dispose()
    {
        Free();
        GC.SuppressFinalize(this);
    }

    private void Free()
    {
        if (_memory != null)
        {
            NativeMemory.AlignedFree(_memory);
            _memory = null;
            GC.RemoveMemoryPressure(Bytes);
        }
    }
}
