using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Tests.Support;

/// <summary>Keeps every chunk.</summary>
internal sealed class KeepingSink : IDipoleSink
{
    private readonly Dictionary<byte[], DipoleChunk> _formatted = [];

    public IReadOnlyList<DipoleColumn> Columns { get; private set; } = [];

    public List<DipoleChunk> Chunks { get; } = [];

    public void Begin(IReadOnlyList<DipoleColumn> columns) => Columns = columns;

    public byte[] Format(DipoleChunk chunk)
    {
        byte[] key = new byte[1];
        lock (_formatted)
        {
            _formatted.Add(key, chunk);
        }

        return key;
    }

    public void Append(byte[] formatted) => Chunks.Add(_formatted[formatted]);
}
