using System.Globalization;

using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Report.Answers;

/// <summary>How numbers are written in report, figures and console.</summary>
/// <remarks>Trials exact with thousands commas; others two significant digits; minus sign U+2212; a space before unit and %.</remarks>
public static class Say
{
    /// <summary>Above this many trials averaging is no plan: `out of reach`.</summary>
    public const long MostTrials = TrialCount.MostPlanned;

    /// <summary>`out of reach`.</summary>
    public const string OutOfReach = "out of reach";

    private const char Minus = '\u2212';

    /// <summary>A count, exact: `45,103`; `out of reach` above ten million or where there is none.</summary>
    public static string Trials(long? count) =>
        count is { } n && n <= MostTrials ? Count(n) : OutOfReach;

    /// <summary>An integer with thousands commas.</summary>
    public static string Count(long count) => Signed(count.ToString("N0", CultureInfo.InvariantCulture));

    /// <summary>`1 trial`, `303 trials`.</summary>
    public static string Plural(long count, string noun) => $"{Count(count)} {noun}{(count == 1 ? "" : "s")}";

    /// <summary>Minutes: `0.5`, `7.5`, `75`, `750`; below 0.1 `under 0.1`.</summary>
    public static string Minutes(double minutes) => Signed(Rounded.Minutes(minutes));

    /// <summary>Minutes longer than a session of so many, with the digits that tell them from it.</summary>
    public static string MinutesBeyond(double minutes, double session) => Signed(Rounded.MinutesBeyond(minutes, session));

    /// <summary>A stated length [s] in minutes: `40`.</summary>
    public static string SessionMinutes(double seconds) => Stated(Math.Round(seconds / 60, 6));

    /// <summary>Two significant digits, with thousands commas: `0.25`, `4.8`, `190`, `12,000`.</summary>
    public static string Two(double value) => Significant(value, 2);

    /// <summary>So many significant digits, trailing zeros kept, no exponent between 1e-4 and 1e9.</summary>
    public static string Significant(double value, int digits) => Signed(Rounded.Significant(value, digits));

    /// <summary>dB with one decimal.</summary>
    public static string Decibels(double db) => Signed((Math.Round(db, 1) + 0.0).ToString("0.0", CultureInfo.InvariantCulture));

    /// <summary>A change in dB with its sign and one decimal: `+0.4`, `-12.3`; `0.0` where it rounds to nothing.</summary>
    public static string SignedDecibels(double db) => Signed((Math.Round(db, 1) + 0.0).ToString("+0.0;-0.0;0.0", CultureInfo.InvariantCulture));

    /// <summary>A value as the study states it, up to 6 significant digits, no trailing zeros.</summary>
    public static string Stated(double value) => Signed(value.ToString("0.######", CultureInfo.InvariantCulture));

    /// <summary>A share as percent: `10 %`.</summary>
    public static string Percent(double share) => $"{Stated(Math.Round(100 * share, 1))} %";

    /// <summary>A probability in whole percent: `under 1 %`, `12 %`, `over 99 %`.</summary>
    public static string Chance(double probability) => probability < 0.005 ? "under 1 %" : probability > 0.995 ? "over 99 %" : $"{Stated(Math.Round(100 * probability))} %";

    /// <summary>Assurance to 5 %: `at least 95 %`, `70 %`, `at most 5 %`.</summary>
    public static string Assurance(double share)
    {
        int percent = 5 * (int)Math.Round(20 * share, MidpointRounding.AwayFromZero);
        return percent >= 95 ? "at least 95 %" : percent <= 5 ? "at most 5 %" : $"{percent.ToString(CultureInfo.InvariantCulture)} %";
    }

    /// <summary>A place or direction in millimetres or as a vector: `[0, 0, 1]`.</summary>
    public static string Vector(double x, double y, double z) => $"[{Stated(x)}, {Stated(y)}, {Stated(z)}]";

    /// <summary>A moment [A m] in nAm as stated.</summary>
    public static string Moment(double moment) => $"{Stated(Math.Round(Si.ToNanoAmpereMetres(moment), 9))} nAm";

    /// <summary>How strong a response is in one region: `3.5 nAm`, `3.5 nAm (2 to 7)`, `6.8 nAm (0.45 uV at Cz-mastoids)`.</summary>
    /// <param name="response">The response as stated.</param>
    /// <param name="region">One of its results.</param>
    public static string Strength(Response response, RegionResult region) => response switch
    {
        { Amplitude: not null } => $"{Two(Si.ToNanoAmpereMetres(region.Moment))} nAm ({Known(response.Amplitude)})",
        { MomentRange: { } r } => $"{Moment(response.Moment)} ({Moment(r.Low)[..^4]} to {Moment(r.High)[..^4]})",
        _ => Moment(response.Moment),
    };

    /// <summary>The same over all regions: `0.45 uV at Cz-mastoids, so 6.8 to 7.1 nAm`.</summary>
    /// <param name="result">The response's results.</param>
    public static string Strength(ResponseResult result)
    {
        if (result.Response.Amplitude is not { } amplitude)
        {
            return Strength(result.Response, result.Regions[0]);
        }

        string least = Two(Si.ToNanoAmpereMetres(result.Regions.Min(r => r.Moment))), most = Two(Si.ToNanoAmpereMetres(result.Regions.Max(r => r.Moment)));
        return $"{Known(amplitude)}, so {(least == most ? least : $"{least} to {most}")} nAm";
    }

    private static string Known(AmplitudeChoice amplitude) => $"{Stated(Math.Round(Si.ToMicrovolts(amplitude.Peak), 9))} {Unit("uV")} at {amplitude.Derivation}";

    /// <summary>`along [0, 0, 1]`, `tangential`.</summary>
    public static string Direction(DirectionChoice direction) => direction.Vector is { } v
        ? $"along {Vector(Math.Round(v.X, 3), Math.Round(v.Y, 3), Math.Round(v.Z, 3))}"
        : Direction(direction.Name);

    /// <summary>Direction in words, for labels.</summary>
    public static string Direction(DirectionName name) => name == DirectionName.StrongestTangential ? "strongest tangential" : Names.Of(name);

    /// <summary>What a target asks, in words: `peak = 3 x residual rms`.</summary>
    /// <param name="target">The target.</param>
    /// <param name="measured">Convention of the amplitude: a peak-to-trough difference carries sqrt(2) of the noise of one point.</param>
    public static string Rule(TargetChoice target, Measured measured) => target switch
    {
        AmplitudeRatioChoice a when measured == Measured.PeakToTrough => $"peak-to-trough = {Stated(a.Ratio)} × sqrt(2) × residual rms",
        AmplitudeRatioChoice a => $"peak = {Stated(a.Ratio)} × residual rms",
        DetectionChoice d => $"detected with power {Percent(d.Power)} at false-alarm rate {Stated(d.Alpha)}{(d.Looks > 1 ? $" over {Stated(d.Looks)} looks" : "")}{Unknowns(d)}",
        VarianceRatioChoice v when v.Power is { } p => $"variance ratio above {Critical(v)} with power {Percent(p)}",
        VarianceRatioChoice v => $"variance ratio expected at {Critical(v)}",
        ResidualNoiseChoice r => $"residual noise of {Stated(Math.Round(Si.ToMicrovolts(r.Residual) * 1000, 6))} nV",
        _ => "the study's target",
    };

    private static string Critical(VarianceRatioChoice v) => v.Critical is { } c ? Stated(c) : $"the critical value of F({Stated(v.Above)}, {Stated(v.Below)}) at {Stated(v.Alpha!.Value)}";

    // Known topography and covariance are the plain case and go unsaid.
    private static string Unknowns(DetectionChoice d) =>
        (d.Topography == Topography.Known ? "" : $", topography {Names.Of(d.Topography)}") + (d.CovarianceEstimated ? ", noise estimated from the same trials" : "");

    /// <summary>How amplitudes are read: `peak to trough`, `baseline to peak`.</summary>
    public static string Convention(Measured measured) => measured == Measured.PeakToTrough ? "peak to trough" : "baseline to peak";

    /// <summary>What a range of 5 to 95 % runs over: `places`, or `places and directions` where the direction is a set.</summary>
    public static string Spread(DirectionName direction) => direction is DirectionName.Tangential or DirectionName.Isotropic ? "places and directions" : "places";

    /// <summary>Over what the figures of a verdict spread: realistic filters add their own errors.</summary>
    public static string Spread(VerdictResult verdict) => Spread(verdict.Direction) + (verdict.Measure == Names.RealisticFilter ? " and the filter's errors" : "");

    /// <summary>`each of 4 averages (2 conditions, 2 replications)`, or empty where the session holds a single average.</summary>
    public static string Averages(Protocol? protocol) => protocol is { } p ? Rounded.Averages(p.Conditions, p.Replications) : "";

    /// <summary>What the session affords: `session 40 min = 23,976 trials`, `... for each of 2 conditions`.</summary>
    public static string Session(Protocol protocol, long trials)
    {
        string length = protocol.Session is { } seconds ? $" {SessionMinutes(seconds)} min" : "";
        return $"session{length} = {Plural(trials, "trial")}{(Averages(protocol) is { Length: > 0 } each ? $" for {each}" : "")}";
    }

    /// <summary>The rule's key in words.</summary>
    public static string RuleKey(string key) => key.Replace('_', ' ');

    /// <summary>Unit with the micro sign.</summary>
    public static string Unit(string unit) => unit.StartsWith('u') ? "µ" + unit[1..] : unit;

    private static string Signed(string text) => text.Replace('-', Minus);

    /// <summary>Band of a transient response, frequency and trial of a steady-state one.</summary>
    public static string Recorded(Response response) => response.Steady is { } steady
        ? $"steady-state at {Stated(steady.Frequency)} Hz in trials of {Stated(steady.Seconds)} s" : $"{Stated(response.Band.Low)} to {Stated(response.Band.High)} Hz";

    /// <summary>What is known of a response's course in time and what filter and jitter do to its peak; empty where nothing is.</summary>
    public static string Course(ResponseResult response)
    {
        if (response.Waveform is not { } waveform)
        {
            return "";
        }

        string jitter = waveform.Jitter > 0 ? FormattableString.Invariant($", latency jitter {waveform.Jitter * 1000:0.###} ms") : "";
        string change = Math.Abs(waveform.LossDb) < 0.05 ? "the peak stays" : FormattableString.Invariant($"filter and jitter {(waveform.LossDb > 0 ? "take" : "add")} {Math.Abs(waveform.LossDb):0.0} dB {(waveform.LossDb > 0 ? "off" : "to")} the peak");
        return $"waveform: {waveform.Description}{jitter}; {change}";
    }
}
