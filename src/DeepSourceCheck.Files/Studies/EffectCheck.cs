using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Studies;

/// <summary>Stated keys that have no effect beside other stated keys, or less than they seem to: a warning each, with the reason.</summary>
internal static class EffectCheck
{
    private static readonly string[] DetectionOptions = ["topography", "covariance"];

    /// <summary>Warns.</summary>
    /// <param name="root">The study.</param>
    /// <param name="responses">Its responses.</param>
    /// <param name="targets">Its targets.</param>
    /// <param name="noise">Its noise, or null.</param>
    /// <param name="reading">Receives the warnings.</param>
    public static void Warn(Section root, IReadOnlyList<Response> responses, IReadOnlyList<TargetChoice> targets, NoiseChoice? noise, Reading reading)
    {
        Detection(root, responses);
        bool asked = targets.Any(t => t is DetectionChoice or VarianceRatioChoice);
        asked |= noise?.EegRecording is { Segment: null };       // its segments are as long as the window
        foreach (Response response in responses.Where(r => r.Window is not null && r.RateCurve.Count == 0 && !asked))
        {
            reading.Warn(response.Key + ".window_ms", "has no effect on any count: detection (its looks) and variance_ratio ask for the window, and the study states neither");
        }

        if (noise is null)
        {
            return;
        }

        string[] white = [.. White(noise)];
        bool spectral = noise.EegRecording is not null || noise.EegTotal is not null || noise.EegDensity is not null || noise.MegDensity is not null || noise.MegPlanarDensity is not null;
        if (white.Length > 0 && !spectral && root.Map("protocol") is { } protocol && protocol.States("interval_jitter_ms") && responses.Any(r => r.Steady is null))
        {
            protocol.Warn("interval_jitter_ms", $"has no effect: {string.Join(" and ", white)} states the noise per trial, without a spectrum, so that trials count as independent at any interval");
        }

        foreach (Response response in responses.Where(r => r.Waveform is not null && white.Length > 0 && targets.Any(t => t is DetectionChoice)))
        {
            reading.Warn(response.Key + (response.Waveform is OscillationChoice ? ".cycles" : ".waveform"),
                $"detection with a filter in time takes the noise of {string.Join(" and ", white)} as white over the band, since it states no spectrum");
        }
    }

    private static void Detection(Section root, IReadOnlyList<Response> responses)
    {
        string[] steady = [.. responses.Where(r => r.Steady is not null).Select(r => r.Name)];
        if (steady.Length == 0 || root.Map("target")?.Map("detection") is not { } detection)
        {
            return;
        }

        foreach (string key in DetectionOptions.Where(k => detection.Raw(k) is PlacedText { Text: not "known" }))
        {
            detection.Warn(key, $"has no effect {(steady.Length < responses.Count ? $"on {string.Join(", ", steady)}" : "here")}: a steady-state response is detected by the power of one reading's bin against its 120 neighbours, F(2, 240)");
        }
    }

    private static IEnumerable<string> White(NoiseChoice noise)
    {
        if (noise.EegRms is not null || noise.EegCovariance is not null)
        {
            yield return noise.EegRms is not null ? "noise.eeg_sensor_uV_rms" : "noise.eeg_covariance";
        }

        if (noise.MegRms is not null || noise.MegCovariance is not null)
        {
            yield return noise.MegRms is not null ? "noise.meg_sensor_fT_rms" : "noise.meg_covariance";
        }
    }
}
