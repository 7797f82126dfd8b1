using System.Diagnostics;
using System.Globalization;

namespace DeepSourceCheck.Cli;

/// <summary>One line on standard error that says which stage runs, how far it is and how long it will still take; rewritten in place, erased at the end.</summary>
/// <remarks>The time left is that of the stage, extrapolated from its own pace, and is shown only once that pace is known.</remarks>
internal sealed class ProgressLine : IDisposable
{
    private static readonly TimeSpan BetweenDraws = TimeSpan.FromMilliseconds(100);
    private static readonly TimeSpan PaceKnownAfter = TimeSpan.FromSeconds(1.5);
    private const double PaceKnownFrom = 0.03;

    private readonly TextWriter _error;
    private readonly int _columns;
    private readonly Func<TimeSpan> _clock;
    private readonly Lock _gate = new();
    private string _stage = "";
    private double _fraction;
    private TimeSpan _stageStart;
    private TimeSpan _lastDraw = TimeSpan.MinValue;
    private int _drawn;
    private bool _ended;

    /// <param name="error">Where the line is drawn.</param>
    /// <param name="columns">Width that it may take [characters].</param>
    /// <param name="clock">Time since an arbitrary start; null: the process's own clock.</param>
    public ProgressLine(TextWriter error, int columns, Func<TimeSpan>? clock = null)
    {
        _error = error;
        _columns = Math.Max(20, columns - 1);
        long start = Stopwatch.GetTimestamp();
        _clock = clock ?? (() => Stopwatch.GetElapsedTime(start));
    }

    /// <summary>Tells the stage and the fraction of it that is done, 0 to 1. May be called from any thread; never goes back within a stage.</summary>
    public void Report(string stage, double fraction)
    {
        lock (_gate)
        {
            TimeSpan now = _clock();
            bool newStage = stage != _stage;
            if (newStage)
            {
                (_stage, _stageStart, _fraction) = (stage, now, 0);
            }

            _fraction = Math.Max(_fraction, double.IsFinite(fraction) ? Math.Clamp(fraction, 0, 1) : 0);
            if (_ended || (!newStage && _lastDraw != TimeSpan.MinValue && now - _lastDraw < BetweenDraws))
            {
                return;
            }

            _lastDraw = now;
            Draw(Text(_stage, _fraction, now - _stageStart));
        }
    }

    /// <summary>Erases the line; later reports draw nothing.</summary>
    public void Dispose()
    {
        lock (_gate)
        {
            if (!_ended && _drawn > 0)
            {
                _error.Write("\r" + new string(' ', _drawn) + "\r");
                _error.Flush();
            }

            _ended = true;
        }
    }

    /// <summary>The line's text.</summary>
    /// <param name="stage">Stage.</param>
    /// <param name="fraction">Fraction done, 0 to 1.</param>
    /// <param name="elapsed">Time since the stage began.</param>
    internal static string Text(string stage, double fraction, TimeSpan elapsed)
    {
        string text = string.Create(CultureInfo.InvariantCulture, $"{stage}: {Math.Floor(100 * fraction):0} %");
        return fraction >= PaceKnownFrom && fraction < 1 && elapsed >= PaceKnownAfter
            ? text + ", about " + Durations.Rough(elapsed.TotalSeconds * (1 - fraction) / fraction) + " left"
            : text;
    }

    private void Draw(string text)
    {
        string cut = text.Length > _columns ? text[.._columns] : text;
        _error.Write("\r" + cut + new string(' ', Math.Max(0, _drawn - cut.Length)));
        _error.Flush();
        _drawn = cut.Length;
    }
}
