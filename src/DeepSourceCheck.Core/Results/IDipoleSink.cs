namespace DeepSourceCheck.Core.Results;

/// <summary>Takes dipole results as they are computed.</summary>
public interface IDipoleSink
{
    /// <summary>Called once, before anything else, with the columns of every chunk.</summary>
    void Begin(IReadOnlyList<DipoleColumn> columns);

    /// <summary>Turns a chunk into bytes. Pure; may run on several threads at once.</summary>
    byte[] Format(DipoleChunk chunk);

    /// <summary>Appends formatted chunks; called in the order of the dipoles, from one thread at a time.</summary>
    void Append(byte[] formatted);
}
