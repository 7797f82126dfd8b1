using System.Globalization;
using System.Text.Json;

using DeepSourceCheck.Core.Noise.Recordings;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Report.Answers;

namespace DeepSourceCheck.Report.Tables;

/// <summary>assessment.json: the machine-readable answer.</summary>
/// <remarks>
/// UTF-8, written as <see cref="JsonText"/> says.
/// A figure that does not exist is null, and `reason` beside it says why. Units stand in the keys, or beside the value as `unit`.
/// </remarks>
public static class AssessmentJson
{
    /// <summary>The whole file as UTF-8 bytes, with a final line break.</summary>
    public static byte[] Bytes(Assessment assessment)
    {
        using MemoryStream stream = new();
        Write(assessment, stream);
        return stream.ToArray();
    }

    /// <summary>Writes the whole file to a stream.</summary>
    public static void Write(Assessment assessment, Stream stream)
    {
        using (Utf8JsonWriter json = new(stream, JsonText.Options))
        {
            json.WriteStartObject();
            json.WriteProgram(assessment.Version);
            json.WriteString("title", assessment.Study.Title);
            json.WriteArray("inputs", assessment.Inputs, Input);
            json.WriteArray("assumptions", assessment.Assumptions, JsonText.WriteAssumption);
            json.WriteStrings("warnings", assessment.Warnings);
            json.WriteStrings("limits", assessment.Limits);
            if (assessment.Leadfields is { } method)
            {
                json.WriteStartObject("leadfields");
                json.WriteString("eeg", method.Eeg);
                json.WriteString("meg", method.Meg);
                json.WriteString("details", method.Details);
                json.WriteEndObject();
            }

            json.WriteCount("session_trials", SessionTrials(assessment));
            json.WriteArray("responses", assessment.Responses, (j, r) => WriteResponse(j, r, assessment));
            ProtocolJson.WritePeople(json, assessment);
            json.WriteArray("variants", assessment.Variants, (j, v) => WriteVariant(j, v, assessment));
            json.WriteEndObject();
        }

        stream.WriteByte((byte)'\n');
    }

    // Trials of a steady-state response come no faster than they are long: one count for the study only where every response has the same.
    private static long? SessionTrials(Assessment assessment) => !HasSteady(assessment) ? assessment.SessionTrials
        : assessment.Responses.Select(r => assessment.For(r).SessionTrials).Distinct().ToArray() is [var one] ? one : null;

    private static bool HasSteady(Assessment assessment) => assessment.Responses.Any(r => r.Response.Steady is not null);

    private static void Input(Utf8JsonWriter json, InputFile file)
    {
        json.WriteStartObject();
        json.WriteString("path", file.Path);
        json.WriteString("sha256", file.Sha256);
        json.WriteEndObject();
    }

    // A variant's assumptions and warnings are those that the study does not have.
    private static void WriteVariant(Utf8JsonWriter json, VariantResult variant, Assessment study)
    {
        json.WriteStartObject();
        json.WriteString("name", variant.Name);
        json.WriteArray("assumptions", [.. variant.Assessment.Assumptions.Except(study.Assumptions)], JsonText.WriteAssumption);
        json.WriteStrings("warnings", variant.Assessment.Warnings.Except(study.Warnings));
        json.WriteCount("session_trials", SessionTrials(variant.Assessment));
        json.WriteArray("responses", variant.Assessment.Responses, (j, r) => WriteResponse(j, r, variant.Assessment));
        ProtocolJson.WritePeople(json, variant.Assessment);
        json.WriteEndObject();
    }

    private static void WriteResponse(Utf8JsonWriter json, ResponseResult response, Assessment assessment)
    {
        json.WriteStartObject();
        json.WriteString("name", response.Response.Name);
        if (HasSteady(assessment))
        {
            json.WriteCount("session_trials", assessment.For(response).SessionTrials);
        }

        if (response.Waveform is { } waveform)
        {
            json.WriteStartObject("waveform");
            json.WriteString("description", waveform.Description);
            json.WriteFigure("jitter_ms", waveform.Jitter * 1000);
            json.WriteFigure("peak_kept", waveform.Kept);
            json.WriteFigure("peak_loss_db", waveform.LossDb);
            json.WriteFigure("energy_ms", waveform.Energy * 1000);
            json.WriteEndObject();
        }

        json.WriteArray("regions", response.Regions, (j, r) => WriteRegion(j, r, response, assessment));
        json.WriteArray("noise_spectra", response.Spectra, WriteSpectrum);
        if (response.Recording is { } recording)
        {
            WriteRecording(json, recording);
        }

        json.WriteEndObject();
    }

    private static void WriteRecording(Utf8JsonWriter json, RecordedNoise recording)
    {
        json.WriteStartObject("noise_recording");
        json.WriteString("file", recording.File);
        WriteBand(json, "band_read_Hz", recording.BandRead);
        json.WriteFigure("seconds_read", recording.SecondsRead);
        json.WriteFigure("seconds_used", recording.SecondsUsed);
        json.WriteFigure("segment_ms", 1000 * recording.SegmentSeconds);
        json.WriteNumber("segments", recording.Segments);
        json.WriteFigure("rejected_share", recording.RejectedShare);
        json.WriteFigure("independent_samples", recording.IndependentSamples);
        json.WriteFigure("shrinkage", recording.Shrinkage);
        json.WriteFigure("held_out_share", recording.HeldOutShare);
        json.WriteFigure("median_rms_uV", Si.ToMicrovolts(recording.MedianRms));
        json.WriteEndObject();
    }

    // Densities to six digits: a picture of the noise, beside figures in full.
    private static void WriteSpectrum(Utf8JsonWriter json, ReadingSpectrum spectrum)
    {
        json.WriteStartObject();
        json.WriteString("modality", Names.Of(spectrum.Modality));
        json.WriteString("channel", spectrum.Channel);
        json.WriteString("unit", spectrum.Unit);
        WriteBand(json, "band_Hz", spectrum.Band);
        WriteBand(json, "bandwidth_Hz", spectrum.Bandwidth);
        json.WriteFigure("response_level", spectrum.SignalLevel);
        WriteDensities(json, "frequency_Hz", [.. spectrum.Frequencies]);
        WriteDensities(json, "total", spectrum.Total);
        json.WriteArray("causes", spectrum.Noise, (j, curve) =>
        {
            j.WriteStartObject();
            j.WriteString("cause", curve.Cause);
            j.WriteFigure("share_of_band", curve.Share);
            WriteDensities(j, "density", curve.Densities);
            j.WriteEndObject();
        });
        if (spectrum.SignalDensities is { } signal)
        {
            WriteDensities(json, "response_density", [.. signal]);
        }

        json.WriteEndObject();
    }

    private static void WriteBand(Utf8JsonWriter json, string name, Band? band)
    {
        if (band is not { } b)
        {
            json.WriteNull(name);
            return;
        }

        WriteDensities(json, name, [b.Low, b.High]);
    }

    private static void WriteDensities(Utf8JsonWriter json, string name, IReadOnlyList<double?> values)
    {
        json.WriteStartArray(name);
        foreach (double? value in values)
        {
            if (value is { } v)
            {
                json.WriteNumberValue(double.Parse(v.ToString("G6", CultureInfo.InvariantCulture), CultureInfo.InvariantCulture));
            }
            else
            {
                json.WriteNullValue();
            }
        }

        json.WriteEndArray();
    }

    private static void WriteRegion(Utf8JsonWriter json, RegionResult region, ResponseResult response, Assessment assessment)
    {
        json.WriteStartObject();
        json.WriteString("region", region.Region);
        json.WriteNumber("dipoles", region.Dipoles);
        json.WriteNumber("dropped", region.Dropped);
        json.WriteFigure("moment_nAm", Si.ToNanoAmpereMetres(region.Moment));
        json.WriteFigure("spacing_mm", region.Spacing is { } h ? Si.ToMm(h) : null);
        json.WriteFigure("volume_mL", region.Volume is { } v ? Si.ToMillilitres(v) : null);
        json.WriteFigure("captured_field_share", region.FieldCaptured);
        if (region.Split is { } split)
        {
            json.WriteStartObject("split");
            WritePercentiles(json, "weakest_over_strongest", split.WeakestOverStrongest, allFive: false);
            WritePercentiles(json, "angle_to_radial_deg", split.AngleToRadialDeg, allFive: false);
            json.WriteNumber("undefined_dipoles", split.UndefinedDipoles);
            json.WriteNumber("degenerate_dipoles", split.DegenerateDipoles);
            json.WriteEndObject();
        }
        else
        {
            json.WriteNull("split");
        }

        if (region.Supports is { } supports)
        {
            json.WriteStartObject("dipoles_carried_by");
            json.WriteNumber("all_nodes", supports.Whole);
            json.WriteNumber("fewer_nodes", supports.Partial);
            json.WriteNumber("border_nodes", supports.Border);
            json.WriteNumber("element_gradient", supports.Element);
            json.WriteEndObject();
        }

        if (region.Profile is { } profile)
        {
            json.WriteArray("by_depth", profile.ByDepth, (j, bin) => WriteBin(j, bin, "mm", Si.ToMm));
            json.WriteArray("by_angle", profile.ByAngle, (j, bin) => WriteBin(j, bin, "deg", Si.ToDegrees));
            json.WriteArray("by_depth_upright", profile.UprightByDepth, (j, bin) => WriteBin(j, bin, "mm", Si.ToMm));
            json.WriteNumber("points_without_normal", profile.WithoutNormal);
        }

        if (region.Removal is { } loss)
        {
            json.WriteStartObject("environment_removal");
            json.WriteString("direction", Names.Of(loss.Direction));
            json.WriteFigure("matched_filter_db", loss.MatchedFilterDb);
            json.WriteFigure("best_channel_db", loss.BestChannelDb);
            json.WriteFigure("matched_filter_against_left_in_db", loss.MatchedFilterAgainstLeftInDb);
            json.WriteFigure("best_channel_against_left_in_db", loss.BestChannelAgainstLeftInDb);
            json.WriteEndObject();
        }

        if (region.Cancellation.Count > 0)
        {
            json.WriteStartObject("cancellation_db");
            foreach (CancellationResult lost in region.Cancellation)
            {
                json.WriteFigure(Names.Of(lost.Modality), lost.Db);
            }

            json.WriteEndObject();
        }

        json.WriteArray("results", region.Results, WriteMeasure);
        json.WriteArray("verdicts", region.Verdicts, WriteVerdict);
        json.WriteArray("advice", [.. region.Verdicts.Select(v => v.Rule).Distinct()], (j, rule) => WriteAdvice(j, new RegionAnswer(assessment, response.Response, region, rule)));
        if (region.Unknowns is { } unknowns)
        {
            UnknownsJson.Write(json, unknowns);
        }

        AttributionJson.Write(json, region);
        json.WriteRealisticHeads(region.RealisticHeads);
        json.WriteStrings("warnings", region.Warnings);
        json.WriteEndObject();
    }

    private static void WriteBin(Utf8JsonWriter json, ProfileBin bin, string unit, Func<double, double> convert)
    {
        // Edges are round numbers of their unit.
        json.WriteStartObject();
        json.WriteNumber($"from_{unit}", Math.Round(convert(bin.From), 6));
        json.WriteNumber($"to_{unit}", Math.Round(convert(bin.To), 6));
        json.WriteNumber("points", bin.Points);
        json.WriteArray("results", bin.Figures, (j, figure) =>
        {
            j.WriteStartObject();
            j.WriteString("modality", Names.Of(figure.Modality));
            j.WriteString("measure", figure.Measure);
            WritePercentiles(j, "snr_db", figure.SnrDb);
            j.WriteEndObject();
        });
        json.WriteEndObject();
    }

    private static void WriteMeasure(Utf8JsonWriter json, MeasureResult row)
    {
        string? unit = row.Peak?.Unit;
        json.WriteStartObject();
        json.WriteString("modality", Names.Of(row.Modality));
        json.WriteString("direction", Names.Of(row.Direction));
        json.WriteString("measure", row.Measure);
        if (row.Peak is { } peak)
        {
            json.WriteStartObject("peak_amplitude");
            json.WriteFigure("value", peak.Value);
            json.WriteString("unit", peak.Unit);
            json.WriteString("channel", peak.Channel);
            json.WriteEndObject();
        }
        else
        {
            json.WriteNull("peak_amplitude");
        }

        WritePercentiles(json, "snr_db", row.SnrDb);
        json.WriteArray("targets", row.Targets, (j, t) => WriteTarget(j, t, unit));
        if (row.Reason is not null)
        {
            json.WriteString("reason", row.Reason);
        }

        if (row.AtLeak is { } leak)
        {
            json.WriteStartObject("at_leak");
            json.WriteNumber("leak", leak.Leak);
            WritePercentiles(json, "snr_db", leak.SnrDb);
            json.WriteArray("targets", leak.Targets, (j, t) => WriteTarget(j, t, unit));
            json.WriteEndObject();
        }

        json.WriteEndObject();
    }

    private static void WriteTarget(Utf8JsonWriter json, TargetResult target, string? unit)
    {
        json.WriteStartObject();
        json.WriteString("rule", target.Rule);
        WriteCounts(json, "trials", target.Trials);
        if (target.Minutes is { } minutes)
        {
            WritePercentiles(json, "minutes", minutes);
        }
        else
        {
            json.WriteNull("minutes");
        }

        if (target.Presented is { } presented)
        {
            WriteCounts(json, "presented_trials", presented);
        }

        if (target.ChairMinutes is { } chair)
        {
            WritePercentiles(json, "chair_minutes", chair);
        }

        if (target.Weighted is { } weighted)
        {
            WriteCounts(json, "weighted_trials", weighted);
        }

        json.WriteFigure("smallest_nAm", target.SmallestMoment is { } q ? Si.ToNanoAmpereMetres(q) : null);
        if (target.SmallestAmplitude is { } amplitude && unit is not null)
        {
            json.WriteStartObject("smallest_amplitude");
            json.WriteFigure("value", amplitude);
            json.WriteString("unit", unit);
            json.WriteEndObject();
        }

        if (target.Reason is not null)
        {
            json.WriteString("reason", target.Reason);
        }

        json.WriteEndObject();
    }

    private static void WriteCounts(Utf8JsonWriter json, string name, CountPercentiles counts)
    {
        json.WriteStartObject(name);
        json.WriteCount("p05", counts.P05);
        json.WriteCount("p25", counts.P25);
        json.WriteCount("p50", counts.P50);
        json.WriteCount("p75", counts.P75);
        json.WriteCount("p95", counts.P95);
        json.WriteEndObject();
    }

    private static void WriteAdvice(Utf8JsonWriter json, RegionAnswer answer)
    {
        json.WriteStartObject();
        json.WriteString("rule", answer.Rule);
        json.WriteString("modality", answer.Winner is { } winner ? Names.Of(winner.Modality) : null);
        json.WriteString("text", $"{answer.Headline()}. {answer.Recommendation()} {answer.Joint()} {answer.Reason()}".Replace("  ", " ", StringComparison.Ordinal).TrimEnd());
        json.WriteCount("trials_saved_by_both", answer.SavedByBoth);
        json.WriteEndObject();
    }

    private static void WriteVerdict(Utf8JsonWriter json, VerdictResult verdict)
    {
        json.WriteStartObject();
        json.WriteVerdictMembers(verdict);
        if (verdict.FitsSession is { } fits)
        {
            json.WriteBoolean("fits_session", fits);
        }
        else
        {
            json.WriteNull("fits_session");
        }

        json.WriteFigure("assurance", verdict.Assurance);
        if (verdict.Averaging is { } averaging)
        {
            json.WriteStartObject("averaging");
            json.WriteFigure("effective_share", averaging.ShareAtTrials);
            json.WriteFigure("effective_share_of_session", averaging.ShareAtSession);
            if (averaging.ShareUnjittered is { } regular)
            {
                json.WriteFigure("effective_share_without_jitter", regular);
            }

            if (averaging.Reason is not null)
            {
                json.WriteString("reason", averaging.Reason);
            }

            json.WriteEndObject();
        }

        json.WriteFigure("missing_probability", verdict.Missing);
        if (verdict.AtMoments is { } range)
        {
            json.WriteStartObject("trials_at_moment");
            json.WriteCount("low", range.Low);
            json.WriteCount("high", range.High);
            json.WriteEndObject();
        }

        ProtocolJson.Write(json, verdict);
        json.WriteArray("why", verdict.Chain, JsonText.WriteDerivedNumber);
        json.WriteEndObject();
    }

    private static void WritePercentiles(Utf8JsonWriter json, string name, Percentiles p, bool allFive = true)
    {
        json.WriteStartObject(name);
        json.WriteFigure("p05", p.P05);
        if (allFive)
        {
            json.WriteFigure("p25", p.P25);
        }

        json.WriteFigure("p50", p.P50);
        if (allFive)
        {
            json.WriteFigure("p75", p.P75);
        }

        json.WriteFigure("p95", p.P95);
        json.WriteEndObject();
    }
}
