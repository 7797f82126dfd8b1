using System.Runtime.InteropServices;

namespace DeepSourceCheck.Cli;

/// <summary>
/// Ends a run on request. The first signal cancels the run and gives it <see cref="Grace"/> to end by itself; then the clean-up runs and the process ends,
/// even where a library call is in the way. A second signal ends the process at once.
/// </summary>
internal sealed class Interruption : IDisposable
{
    /// <summary>How long a cancelled run may take to end by itself; with the clean-up the program ends within a second.</summary>
    private static readonly TimeSpan Grace = TimeSpan.FromMilliseconds(600);

    private readonly CancellationTokenSource _source = new();
    private readonly List<PosixSignalRegistration> _registrations = [];
    private readonly Lock _gate = new();
    private readonly List<Action> _cleanUps = [];
    private int _signals;

    /// <summary>Cancelled by the first signal.</summary>
    public CancellationToken Token => _source.Token;

    /// <summary>An interruption that listens to the signals of the process: interrupt, terminate, hang-up.</summary>
    public static Interruption OfProcess()
    {
        var interruption = new Interruption();
        foreach (PosixSignal signal in new[] { PosixSignal.SIGINT, PosixSignal.SIGTERM, PosixSignal.SIGHUP })
        {
            interruption._registrations.Add(PosixSignalRegistration.Create(signal, interruption.OnSignal));
        }

        return interruption;
    }

    /// <summary>Asks the run to end, as the first signal does.</summary>
    public void Request() => _source.Cancel();

    /// <summary>Registers what must be removed should the process have to end from outside the run; disposing the answer withdraws it.</summary>
    public IDisposable Guard(Action cleanUp)
    {
        lock (_gate)
        {
            _cleanUps.Add(cleanUp);
        }

        return new Guarded(this, cleanUp);
    }

    /// <inheritdoc/>
    public void Dispose()
    {
        foreach (PosixSignalRegistration registration in _registrations)
        {
            registration.Dispose();
        }

        _source.Dispose();
    }

    private void OnSignal(PosixSignalContext context)
    {
        context.Cancel = true;
        if (Interlocked.Increment(ref _signals) > 1)
        {
            EndNow(attempts: 1);
        }

        var watchdog = new Thread(() =>
        {
            Thread.Sleep(Grace);
            EndNow(attempts: 50);
        })
        { IsBackground = true, Name = "interruption" };
        watchdog.Start();
        try
        {
            _source.Cancel();
        }
        catch (Exception e) when (e is AggregateException or ObjectDisposedException)
        {
            // A callback failed, or the run has just ended: the watchdog ends the process either way.
        }
    }

    private void EndNow(int attempts)
    {
        Action[] cleanUps;
        lock (_gate)
        {
            cleanUps = [.. _cleanUps];
        }

        foreach (Action cleanUp in cleanUps)
        {
            // The run may still be writing into the folder that is removed: try again until nothing is left.
            for (int attempt = 0; attempt < attempts; attempt++)
            {
                try
                {
                    cleanUp();
                    break;
                }
                catch (Exception e) when (e is IOException or UnauthorizedAccessException or InvalidOperationException)
                {
                    Thread.Sleep(20);
                }
            }
        }

        Environment.Exit(ExitStatus.Interrupted);
    }

    private sealed class Guarded(Interruption owner, Action cleanUp) : IDisposable
    {
        public void Dispose()
        {
            lock (owner._gate)
            {
                owner._cleanUps.Remove(cleanUp);
            }
        }
    }
}
