using System.Buffers;

namespace DeepSourceCheck.Core.Results;

/// <summary>Takes dipole results as they are computed.</summary>
public interface IDipoleSink
{
    /// <summary>Called once, before anything else, with the columns of every chunk.</summary>
    void Begin(IReadOnlyList<DipoleColumn> columns);

    /// <summary>Turns a chunk into bytes. Pure; may run on several threads at once.</summary>
    /// <param name="chunk">The chunk; its arrays are overwritten afterwards.</param>
    /// <param name="text">Receives the bytes.</param>
    void Format(DipoleChunk chunk, IBufferWriter<byte> text);

    /// <summary>Appends formatted chunks; called in the order of the dipoles, from one thread at a time.</summary>
    void Append(ReadOnlySpan<byte> formatted);
}
