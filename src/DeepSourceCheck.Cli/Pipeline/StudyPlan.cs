using DeepSourceCheck.Core.Planning;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Regions;
using DeepSourceCheck.Files.Studies;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>One study, read, with head, sensors, regions and noise built as far as that goes without a solution; what its run will take is known, and that it fits.</summary>
internal sealed class StudyPlan
{
    private readonly StudyReading _reading;
    private readonly Purpose _purpose;
    private readonly InputDigests _inputs;
    private readonly List<string> _warnings;
    private readonly SensorAssembly _sensors;
    private readonly RegionAssembly _regions;
    private readonly StudySetup _setup;
    private readonly BuiltNoise? _noise;

    /// <param name="reading">The study as read.</param>
    /// <param name="library">Region library.</param>
    /// <param name="purpose">What the study is read for.</param>
    /// <param name="settings">Budget, cancellation.</param>
    /// <exception cref="InputException">The input is wrong, or would not fit into the budget.</exception>
    public StudyPlan(StudyReading reading, RegionLibrary library, Purpose purpose, RunSettings settings)
    {
        (_reading, _purpose, _inputs, _warnings) = (reading, purpose, new InputDigests(reading), [.. reading.Warnings]);
        settings.Cancellation.ThrowIfCancellationRequested();
        _sensors = SensorAssembly.Build(reading, _inputs, purpose, settings, _warnings);
        settings.Cancellation.ThrowIfCancellationRequested();
        _regions = new RegionAssembly(reading, library, _sensors, _inputs, purpose, settings);
        _warnings.AddRange(_regions.Warnings);
        LeadfieldCost cost = _sensors.Cost(_regions.Filled);
        long rows = _sensors.Source.EegRows + _sensors.Source.MegRows;
        Memory = Prediction.Memory(_regions.Filled, rows, purpose) + cost.Bytes;
        Seconds = Prediction.Seconds(reading.Study, _regions.Filled, rows, purpose) + cost.Seconds;
        _sensors.RefuseTooLarge(_regions.Filled, settings);
        _setup = _sensors.Setup(reading.Study, _regions.Filled);
        if (purpose == Purpose.Assess)
        {
            _warnings.AddRange(MomentCheck.Judge(reading, _setup));
            _setup = _setup with { Waveforms = WaveformAssembly.Build(reading, _inputs, _warnings) };
            _noise = NoiseAssembly.Build(reading, _sensors, _inputs, _warnings);
        }
    }

    /// <summary>Predicted peak memory [bytes].</summary>
    public long Memory { get; }

    /// <summary>Predicted time [s].</summary>
    public double Seconds { get; }

    /// <summary>Solves for what is missing, unless the study is only checked.</summary>
    /// <param name="settings">Progress, cancellation.</param>
    /// <exception cref="InputException">The noise cannot be meant.</exception>
    /// <exception cref="NotSolvedException">The equations of a head were not solved.</exception>
    public PreparedStudy Prepare(RunSettings settings)
    {
        StudySetup setup = _setup;
        BuiltNoise? noise = _noise;
        if (!_sensors.IsComputed && !settings.CheckOnly)
        {
            _sensors.Compute(_regions.Filled, settings);
            noise ??= _purpose == Purpose.Assess ? NoiseAssembly.Build(_reading, _sensors, _inputs, _warnings) : null;
            setup = _sensors.Setup(_reading.Study, _regions.Filled) with { Waveforms = _setup.Waveforms };
        }

        return new PreparedStudy
        {
            Reading = _reading,
            Setup = noise?.Into(setup) ?? setup,
            Inputs = _inputs.Files,
            Found = BaselineAssembly.Found(noise?.Model.EegRecorded ?? []),
            Warnings = [.. _warnings.Distinct()],
            PredictedMemory = Memory,
            PredictedSeconds = Seconds,
        };
    }
}
