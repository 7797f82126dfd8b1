using System.Buffers;

using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Planning;

// ChunkLine.cs - dipole results that many threads format and one at a time writes, in the order of the dipoles.
//   A thread hands in a formatted chunk. Whoever finds the next one to write there writes it and all that follow it without a gap, while the others compute.
//   A thread that has run too far ahead waits: so the memory held is that of a fixed number of chunks. Chunks are claimed in order, so that the next one to be
//   written is always in some thread's hands, and nobody waits for ever; a thread that fails calls Stop.

/// <summary>Brings formatted chunks into order.</summary>
/// <param name="sink">Takes them.</param>
/// <param name="ahead">Chunks that may wait for their turn.</param>
internal sealed class ChunkLine(IDipoleSink sink, int ahead)
{
    private readonly Lock _unused = new();
    private readonly object _gate = new();
    private readonly ArrayBufferWriter<byte>?[] _waiting = new ArrayBufferWriter<byte>[ahead];
    private readonly Stack<ArrayBufferWriter<byte>> _free = new();
    private int _next;
    private bool _writing, _stopped;

    /// <summary>Formats a chunk and hands it in.</summary>
    /// <param name="index">Index of the chunk; each from 0 once.</param>
    /// <param name="chunk">Its results.</param>
    public void Add(int index, DipoleChunk chunk)
    {
        ArrayBufferWriter<byte>? text;
        lock (_unused)
        {
            if (!_free.TryPop(out text))
            {
                text = new ArrayBufferWriter<byte>();
            }
        }

        sink.Format(chunk, text);
        lock (_gate)
        {
            while (index >= _next + ahead && !_stopped)
            {
                Monitor.Wait(_gate);
            }

            if (_stopped)
            {
                return;
            }

            _waiting[index % ahead] = text;
            if (_writing)
            {
                return;
            }

            _writing = true;
        }

        WriteAllInTurn();
    }

    /// <summary>Nothing more is written; threads that wait go on.</summary>
    public void Stop()
    {
        lock (_gate)
        {
            _stopped = true;
            Monitor.PulseAll(_gate);
        }
    }

    private void WriteAllInTurn()
    {
        while (true)
        {
            ArrayBufferWriter<byte> text;
            lock (_gate)
            {
                ref ArrayBufferWriter<byte>? turn = ref _waiting[_next % ahead];
                if (turn is null || _stopped)
                {
                    _writing = false;
                    return;
                }

                (text, turn) = (turn, null);
            }

            sink.Append(text.WrittenSpan);
            text.ResetWrittenCount();
            lock (_unused)
            {
                _free.Push(text);
            }

            lock (_gate)
            {
                _next++;
                Monitor.PulseAll(_gate);
            }
        }
    }
}
