using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Planning;

/// <summary>
/// Streams the dipoles of one region through leadfield, split and measures, on all processors. The leadfield is never held: a block of eight dipoles passes every stage.
/// </summary>
/// <remarks>
/// Dipoles are cut into chunks of fixed size; each thread takes the next chunk until there is none, without waiting for the others. Tallies add up in any order, chunks are written in
/// theirs (<see cref="ChunkLine"/>): the same bytes for any number of threads. Where every dipole is read under several draws of a filter's errors, draw after draw runs over all chunks.
/// </remarks>
internal sealed class RegionRun(EvaluationPlan plan, IHead head, ILeadfieldSource source)
{
    /// <summary>Blocks of a chunk.</summary>
    public const int BlocksAChunk = 32;

    /// <summary>Dipoles of a chunk.</summary>
    public const int ChunkSize = BlocksAChunk * LeadfieldBlock.Lanes;

    private const int ChunksAheadPerThread = 4, ChunksBetweenReports = 16;

    /// <summary>Reads every dipole of a region.</summary>
    /// <param name="region">The region.</param>
    /// <param name="sink">Takes dipole results, or null.</param>
    /// <param name="progress">Told the number of dipoles that are done; from any thread, never from two at once.</param>
    /// <param name="cancellation">Stops between chunks.</param>
    public RegionTally Run(FilledRegion region, IDipoleSink? sink, Action<long>? progress, CancellationToken cancellation)
    {
        int dipoles = region.Positions.Length;
        int once = (dipoles + ChunkSize - 1) / ChunkSize, chunks = once * plan.Passes;
        int threads = Threads(chunks);
        var tallies = new RegionTally[threads];
        ChunkLine? line = sink is null ? null : new ChunkLine(sink, ChunksAheadPerThread * threads);
        int claimed = 0, done = 0;
        var reporting = new Lock();
        Parallel.For(0, threads, new ParallelOptions { MaxDegreeOfParallelism = threads, CancellationToken = cancellation }, thread =>
        {
            tallies[thread] = new RegionTally(plan, (long)dipoles * plan.Passes) { Profile = region.CorticalPlaces.Length > 0 && plan.View.Errors is null && !plan.IsSpectral ? new ProfileTally(plan, dipoles) : null };
            var worker = new ChunkReader(plan, head, source, tallies[thread], line is not null);
            try
            {
                for (int chunk; (chunk = Interlocked.Increment(ref claimed) - 1) < chunks;)
                {
                    cancellation.ThrowIfCancellationRequested();
                    int start = chunk % once * ChunkSize;
                    worker.Read(region, start, Math.Min(ChunkSize, dipoles - start), chunk / once);
                    line?.Add(chunk, worker.Results!);
                    if (progress is not null && Interlocked.Increment(ref done) % ChunksBetweenReports == 0)
                    {
                        lock (reporting)
                        {
                            progress(Math.Min((long)Volatile.Read(ref done) * ChunkSize / plan.Passes, dipoles));
                        }
                    }
                }
            }
            catch
            {
                Volatile.Write(ref claimed, chunks);            // the others end with the chunk that they have
                line?.Stop();
                throw;
            }
        });
        progress?.Invoke(dipoles);
        return RegionTally.Sum(tallies, cancellation);
    }

    /// <summary>Threads that share so many chunks: what they find does not depend on their number.</summary>
    internal static int Threads(int chunks) => Math.Max(1, Math.Min(Environment.ProcessorCount, chunks));

    /// <summary>Name of a kept point: the study's, or its row in the region.</summary>
    internal static string PointName(FilledRegion region, int k) =>
        region.PointNames.Length > 0 ? region.PointNames[k] : region.Rows[k].ToString(System.Globalization.CultureInfo.InvariantCulture);
}
