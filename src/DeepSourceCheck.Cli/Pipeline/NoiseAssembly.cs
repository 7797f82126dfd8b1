using System.Globalization;

using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Noise.Recordings;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Files.Npy;
using DeepSourceCheck.Files.Studies;
using DeepSourceCheck.Files.Tables;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>The noise of a study at its sensors.</summary>
internal static class NoiseAssembly
{
    /// <summary>Places of the background sources.</summary>
    public const int BackgroundPlaces = 500;

    // Least density [V or T per sqrt(Hz)] of the usual instruments: a measured covariance cannot be far below it.
    private static readonly double QuietestAmplifier = Si.FromNanovolts(2), QuietestSensor = Si.FromFemtotesla(0.2), QuietestPlanar = Si.FromFemtoteslaPerCm(0.5);

    // Largest rms [V, T, T/m] that a trial may have: what lies beyond is mostly a covariance in uV^2 or fT^2.
    private const double LoudestElectrode = 1e-3, LoudestSensor = 1e-8, LoudestPlanar = 1e-6;

    private const string EegCovarianceKey = "noise.eeg_covariance", MegCovarianceKey = "noise.meg_covariance";

    /// <summary>Builds the noise model and judges what the study states.</summary>
    /// <param name="reading">The study as read.</param>
    /// <param name="sensors">Sensors and head.</param>
    /// <param name="inputs">Receives the files that are read.</param>
    /// <param name="warnings">Receives what the user must know.</param>
    /// <returns>The noise; null where it needs leadfields that a check does not compute.</returns>
    /// <exception cref="InputException">Noise that contradicts itself or cannot be meant.</exception>
    public static BuiltNoise? Build(StudyReading reading, SensorAssembly sensors, InputDigests inputs, List<string> warnings)
    {
        Study study = reading.Study;
        NoiseChoice choice = study.Noise ?? new NoiseChoice();
        double[]? eegCovariance = Covariance(choice.EegCovariance, EegCovarianceKey, sensors.Electrodes.Count, inputs);
        double[]? megCovariance = sensors.MegReported ? Covariance(choice.MegCovariance, MegCovarianceKey, sensors.MegNames.Count, inputs) : null;
        JudgeTotal(reading, choice, warnings);
        foreach (Response response in study.Responses)
        {
            JudgeCovariance(reading, eegCovariance, EegCovarianceKey, response, _ => (QuietestAmplifier, LoudestElectrode, "V"), warnings);
            JudgeCovariance(reading, megCovariance, MegCovarianceKey, response,
                k => sensors.MegKinds[k] == CoilKind.PlanarGradiometer ? (QuietestPlanar, LoudestPlanar, "T/m") : (QuietestSensor, LoudestSensor, "T"), warnings);
        }

        JudgeReference(reading, sensors, eegCovariance, warnings);
        CheckDerivations(reading, sensors, eegCovariance, EegCovarianceKey);
        IReadOnlyList<RecordedNoise> recorded = choice.EegRecording is { } recording && sensors.Electrodes.Count > 0
            ? BaselineAssembly.Build(reading, recording, sensors, inputs, warnings) : [];
        foreach (RecordedNoise noise in recorded)
        {
            CheckDerivations(reading, sensors, noise.Covariance, BaselineAssembly.Key);
        }

        double[]? total = choice.EegTotal is { } stated && sensors.Electrodes.Count > 0
            ? Derivation.Parse(stated.Derivation, [.. sensors.Electrodes.Select(e => e.Name)], study.Eeg?.Layout is not null, "noise.eeg_total.derivation").Weights(sensors.Electrodes)
            : null;
        bool background = WantsBackground(study, sensors);
        BrainTables? brain = background ? Tables(choice, inputs) : null;
        if (background && !sensors.IsComputed)
        {
            return null;
        }

        BackgroundField? field = background && sensors.Tables() is { } tables ? Background(tables, sensors) : null;
        if (background && field is null)
        {
            warnings.Add("with imported leadfields there is no brain noise: the head in which its sources lie is not known");
        }

        // The array that only splits directions carries equal noise in every channel: its level does not matter.
        NoiseChoice effective = sensors.MegReported ? choice : choice with { MegRms = 1e-15, MegDensity = null, Environment = null };
        var builder = new NoiseBuilder(effective, sensors.Electrodes.Count, sensors.MegKinds, field, total,
            brain, effective.Environment is null ? null : sensors.Channels);
        try
        {
            NoiseModel model = builder.Build(eegCovariance, megCovariance, study.Responses, recorded);
            warnings.AddRange(builder.Warnings);
            CheckSamples(reading, model);
            return new BuiltNoise(model, model.MegOperator is null ? null : builder.Environment);
        }
        catch (InputException error) when (error.Problems.All(p => p.File is null))
        {
            throw new InputException([.. error.Problems.Select(p => reading.Problem(p.Key ?? "noise", p.Message))]);
        }
    }

    /// <summary>True where a study's noise holds the brain's own field: it is on, and a modality's noise comes from densities.</summary>
    /// <param name="study">The study.</param>
    /// <param name="sensors">Its sensors.</param>
    public static bool WantsBackground(Study study, SensorAssembly sensors)
    {
        NoiseChoice choice = study.Noise ?? new NoiseChoice();
        return NoiseBuilder.WantsBrain(choice)
            && ((sensors.Electrodes.Count > 0 && choice.EegCovariance is null && choice.EegRms is null && choice.EegRecording is null)
                || (sensors.MegReported && choice.MegCovariance is null && choice.MegRms is null));
    }

    private static BackgroundField Background(TableSensors tables, SensorAssembly sensors) => BackgroundField.Compute(
        sensors.Head.BackgroundPlaces(BackgroundPlaces), sensors.Source, tables.Source,
        Derivation.Parse(DefaultNoiseTables.Derivation, TableSensors.Names).Weights(tables.Electrodes));

    // The study's own tables in place of the default ones; null where it has none.
    private static BrainTables? Tables(NoiseChoice choice, InputDigests inputs)
    {
        if (choice.BrainEegTable is null && choice.BrainMegTable is null)
        {
            return null;
        }

        BrainTables tables = BrainTables.Default;
        if (choice.BrainEegTable is { } eeg)
        {
            tables = tables with { Eeg = Read(eeg, DensityTable.Microvolts, Si.FromMicrovolts), EegName = eeg };
        }

        return choice.BrainMegTable is { } meg ? tables with { Meg = Read(meg, DensityTable.Femtotesla, Si.FromFemtotesla), MegName = meg } : tables;

        LogLogTable Read(string name, string column, Func<double, double> toSi)
        {
            (string path, string display) = inputs.Use(name);
            return DensityTable.Read(path, display, column, toSi);
        }
    }

    private static double[]? Covariance(CovarianceChoice? choice, string key, int rows, InputDigests inputs)
    {
        if (choice is null || rows == 0)
        {
            return null;
        }

        try
        {
            (string path, string display) = inputs.Use(choice.File);
            double[] covariance = CovarianceFile.Read(path, display, rows, mayHoldReference: key == EegCovarianceKey);
            return choice.AveragedTrials == 1 ? covariance : [.. covariance.Select(c => c * choice.AveragedTrials)];
        }
        catch (InputException error)
        {
            throw new InputException([.. error.Problems.Select(p => p with { Key = p.Key ?? key })]);
        }
    }

    private static void JudgeTotal(StudyReading reading, NoiseChoice choice, List<string> warnings)
    {
        if (choice.EegTotal is not { } total)
        {
            return;
        }

        double usual = Si.ToMicrovolts(DefaultNoiseTables.EegTotal.Rms(total.Band.Low, total.Band.High));
        Judge(reading, warnings, "noise.eeg_total.rms_uV", Si.ToMicrovolts(total.Rms), 0.3 * usual, 3 * usual, "uV", "the total in this band");
    }

    private static void JudgeCovariance(
        StudyReading reading, double[]? covariance, string key, Response response, Func<int, (double Density, double Loudest, string Unit)> usual, List<string> warnings)
    {
        if (covariance is null)
        {
            return;
        }

        // A row that is exactly zero is the reference of the recording, not a quiet channel.
        int n = (int)Math.Round(Math.Sqrt(covariance.Length));
        int[] rows = [.. Enumerable.Range(0, n).Where(k => covariance[k * n + k] > 0)];
        double root = Math.Sqrt(response.Band.Width);
        JudgeRow(rows.MinBy(k => covariance[k * n + k] / Math.Pow(usual(k).Density, 2)));
        JudgeRow(rows.MaxBy(k => covariance[k * n + k] / Math.Pow(usual(k).Loudest, 2)));

        void JudgeRow(int row)
        {
            (double density, double loudest, string unit) = usual(row);
            Judge(reading, warnings, key, Digits(Math.Sqrt(covariance[row * n + row])), Digits(density * root), loudest, unit,
                $"row {row + 1}: the root of its variance, against instruments and recordings over the band of {response.Name},");
        }

        static double Digits(double value) => double.Parse(value.ToString("G3", CultureInfo.InvariantCulture), CultureInfo.InvariantCulture);
    }

    // Signal and noise must have the same reference. Referencing again is harmless; a referenced covariance beside an unreferenced leadfield is not.
    private static void JudgeReference(StudyReading reading, SensorAssembly sensors, double[]? covariance, List<string> warnings)
    {
        if (covariance is null || sensors.Imported is not null || reading.Study.Eeg?.Reference.Kind != ReferenceKind.None)
        {
            return;
        }

        int n = sensors.Electrodes.Count;
        int zero = Enumerable.Range(0, n).FirstOrDefault(k => covariance[k * n + k] == 0, -1);
        bool average = n > 1 && covariance.Sum() <= 1e-5 * Enumerable.Range(0, n).Sum(k => covariance[k * n + k]);
        if (zero >= 0 || average)
        {
            warnings.Add($"{EegCovarianceKey} is that of a referenced recording ({(zero >= 0 ? $"{sensors.Electrodes[zero].Name} has no variance" : "its electrodes sum to zero")}) "
                + "while sensors.eeg.reference is none: state the recording's reference, or signal and noise do not match");
        }
    }

    // A derivation that is exactly zero in the recording has neither signal nor noise.
    private static void CheckDerivations(StudyReading reading, SensorAssembly sensors, double[]? covariance, string key)
    {
        if (covariance is null)
        {
            return;
        }

        int n = sensors.Electrodes.Count;
        foreach ((string name, double[] w) in sensors.Derivations)
        {
            double variance = 0, scale = 0;
            for (int i = 0; i < n; i++)
            {
                scale += w[i] * w[i] * covariance[i * n + i];
                for (int j = 0; j < n; j++)
                {
                    variance += w[i] * w[j] * covariance[i * n + j];
                }
            }

            if (!(variance > 1e-12 * scale))
            {
                throw new InputException([reading.Problem(key, $"the derivation {name} has no variance in it; leave the derivation out, or give the covariance of all electrodes")]);
            }
        }
    }

    /// <summary>Warns of a value that is far from what is usual, or refuses it.</summary>
    internal static void Judge(StudyReading reading, List<string> warnings, string key, double value, double low, double high, string unit, string what)
    {
        PlausibilityJudgement judgement = Plausibility.Judge(key, value, low, high, unit, reading.Study.AcceptImplausible, what);
        switch (judgement.Is)
        {
            case Plausible.Problem:
                throw new InputException([reading.Problem(key, judgement.Text)]);
            case Plausible.Warning:
                warnings.Add($"{key}: {judgement.Text}");
                break;
        }
    }

    private static void CheckSamples(StudyReading reading, NoiseModel model)
    {
        Check(model.EegSamples, model.EegRows, "noise.eeg_covariance.samples");
        Check(model.MegSamples, model.MegRows, "noise.meg_covariance.samples");

        void Check(double? samples, int rows, string key)
        {
            if (samples is { } nu && nu <= rows + 1)
            {
                throw new InputException([reading.Problem(key, string.Create(CultureInfo.InvariantCulture,
                    $"a covariance of {rows} channels from {nu:0.###} independent samples has no usable inverse; more than {rows + 1} samples are needed: use a longer baseline or fewer channels"))]);
            }
        }
    }
}
