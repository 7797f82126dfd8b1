using System.Buffers;

using DeepSourceCheck.Core.Planning;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Tests.Report;

namespace DeepSourceCheck.Tests.Core.Planning;

/// <summary>Chunks from many threads, written in the order of the dipoles.</summary>
public class ChunkLineTests
{
    private static readonly TimeSpan Patience = TimeSpan.FromSeconds(30);

    [Fact]
    public async Task Chunks_HandedInByManyThreads_AreWrittenInOrderByOneAtATime()
    {
        const int chunks = 400, threads = 4;
        var sink = new NumberSink();
        var line = new ChunkLine(sink, 8);
        int claimed = 0;
        Task[] tasks = [.. Enumerable.Range(0, threads).Select(_ => Task.Run(() =>
        {
            for (int chunk; (chunk = Interlocked.Increment(ref claimed) - 1) < chunks;)
            {
                line.Add(chunk, NumberSink.Chunk(chunk));
            }
        }))];
        await Task.WhenAll(tasks).WaitAsync(Patience);
        Assert.Equal(Enumerable.Range(0, chunks), sink.Written);
    }

    [Fact]
    public async Task ThreadThatIsTooFarAhead_WaitsUntilTheLineIsStopped()
    {
        var sink = new NumberSink();
        var line = new ChunkLine(sink, 2);
        line.Add(1, NumberSink.Chunk(1));
        Task ahead = Task.Run(() => line.Add(2, NumberSink.Chunk(2)));
        Assert.NotSame(ahead, await Task.WhenAny(ahead, Task.Delay(TimeSpan.FromMilliseconds(100))));   // chunk 2 has to wait for chunk 0
        line.Stop();
        await ahead.WaitAsync(Patience);
        Assert.Empty(sink.Written);
    }

    /// <summary>Writes the number of dipoles of a chunk as its text.</summary>
    private sealed class NumberSink : IDipoleSink
    {
        private int _inside;

        public List<int> Written { get; } = [];

        public static DipoleChunk Chunk(int number)
        {
            DipoleChunk chunk = AssessmentFixture.Chunk(0, 0);
            chunk.Count = number;
            return chunk;
        }

        public void Begin(IReadOnlyList<DipoleColumn> columns)
        {
        }

        public void Format(DipoleChunk chunk, IBufferWriter<byte> text) => text.Write(BitConverter.GetBytes(chunk.Count));

        public void Append(ReadOnlySpan<byte> formatted)
        {
            Assert.Equal(1, Interlocked.Increment(ref _inside));
            Written.Add(BitConverter.ToInt32(formatted));
            Interlocked.Decrement(ref _inside);
        }
    }
}
