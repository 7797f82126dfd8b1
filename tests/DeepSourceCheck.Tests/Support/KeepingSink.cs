using System.Buffers;
using System.Buffers.Binary;

using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Tests.Support;

/// <summary>Keeps a copy of every chunk.</summary>
internal sealed class KeepingSink : IDipoleSink
{
    private readonly List<DipoleChunk> _formatted = [];

    public IReadOnlyList<DipoleColumn> Columns { get; private set; } = [];

    public List<DipoleChunk> Chunks { get; } = [];

    public void Begin(IReadOnlyList<DipoleColumn> columns) => Columns = columns;

    public void Format(DipoleChunk chunk, IBufferWriter<byte> text)
    {
        var copy = new DipoleChunk
        {
            Response = chunk.Response,
            Region = chunk.Region,
            Count = chunk.Count,
            Points = chunk.Points[..chunk.Count],
            Positions = chunk.Positions[..chunk.Count],
            Directions = chunk.Directions[..(3 * chunk.Count)],
            SingularValues = chunk.SingularValues[..chunk.Count],
            States = chunk.States[..chunk.Count],
            SnrDb = [.. chunk.SnrDb.Select(column => column[..chunk.Count])],
        };
        lock (_formatted)
        {
            BinaryPrimitives.WriteInt32LittleEndian(text.GetSpan(sizeof(int)), _formatted.Count);
            text.Advance(sizeof(int));
            _formatted.Add(copy);
        }
    }

    public void Append(ReadOnlySpan<byte> formatted)
    {
        lock (_formatted)
        {
            Chunks.Add(_formatted[BinaryPrimitives.ReadInt32LittleEndian(formatted)]);
        }
    }
}
