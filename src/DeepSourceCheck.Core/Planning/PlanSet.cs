using System.Globalization;

using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Waveforms;

namespace DeepSourceCheck.Core.Planning;

// PlanSet.cs - everything that is read of one response.
//   The peak, by all measures but realistic filters: always. Where the waveform is known, detection stands on d^2 instead: the same measures against the noise as a filter in time sees it.
//   Where a verdict asks for realistic filters, those, likewise once or twice. Each is a plan of its own and reads the region for itself: what is not asked for costs nothing.

/// <summary>The plans of one response.</summary>
internal sealed class PlanSet
{
    private readonly StudySetup _setup;
    private readonly PlanView _view;
    private readonly SignalSpace? _spectral;
    private readonly FilterErrors? _errors;

    /// <param name="setup">The study.</param>
    /// <param name="response">The response.</param>
    /// <exception cref="InputException">A baseline is too short for the covariance of a realistic filter.</exception>
    public PlanSet(StudySetup setup, Response response)
    {
        _setup = setup;
        NoiseModel model = setup.Noise!;
        NoiseCovariance noise = model.Of(response);
        Space = new SignalSpace(noise, setup.Reference, setup.Derivations, setup.MegNames, setup.MegKinds);
        double jitter = setup.Study.LatencyDeviation(response);
        double? frequency = response.Steady?.Frequency ?? response.ComponentFrequency;
        RecordedWaveform? waveform = null;
        if (Course(response) is { } course)
        {
            var spectrum = new NoiseSpectrum(model, response.Band.Low, response.Band.High);
            waveform = new RecordedWaveform(course, response.Band, response.Measured, jitter, spectrum.Kinks);
            if (setup.Study.Targets.Any(t => t is DetectionChoice))
            {
                _spectral = Space.Against(new SpectralNoise(Space, spectrum, waveform));
            }

            Waveform = new(waveform.Description, jitter, waveform.Kept, waveform.Energy);
        }
        else if (jitter > 0 && frequency is { } f)
        {
            double x = 2 * Math.PI * f * jitter;
            Waveform = new(string.Create(CultureInfo.InvariantCulture, $"a component of {f:0.###} Hz"), jitter, Math.Exp(-x * x / 2), null);
        }

        _view = new PlanView { Kept = Waveform?.Kept ?? 1, Waveform = waveform, Jitter = jitter };
        if (response.EegMeasure == Names.RealisticFilter || response.MegMeasure == Names.RealisticFilter)
        {
            double? baseline = 2 * response.Band.Width * response.Baseline;
            _errors = new FilterErrors(response.PlaceError, setup.OtherHeads.Count > 0 ? setup.OtherHeads : [setup.Source], Space,
                Samples(response, noise.EegSamples ?? baseline ?? model.Recorded(response.Band)?.IndependentSamples, Modality.Eeg), Samples(response, noise.MegSamples ?? baseline, Modality.Meg), setup.NearestPoint);
        }
    }

    /// <summary>Channels against the noise of one trial.</summary>
    public SignalSpace Space { get; }

    /// <summary>What filter and jitter leave; null where nothing is known of the course in time.</summary>
    public WaveformResult? Waveform { get; }

    /// <summary>The plan of the peak.</summary>
    /// <param name="response">The response, its moment found.</param>
    public EvaluationPlan Peak(Response response) => Plan(response, Space, _view);

    /// <summary>All other plans.</summary>
    /// <param name="peak">The peak's plan.</param>
    public IReadOnlyList<EvaluationPlan> Others(EvaluationPlan peak)
    {
        var plans = new List<EvaluationPlan>();
        foreach (FilterErrors? errors in new[] { null, _errors }.Take(_errors is null ? 1 : 2))
        {
            PlanView view = _view with { Errors = errors };
            if (errors is not null)
            {
                plans.Add(Plan(peak.Response, Space, view));
            }

            if (_spectral is not null)
            {
                plans.Add(Plan(peak.Response, _spectral, view));
            }
        }

        return plans;
    }

    private EvaluationPlan Plan(Response response, SignalSpace space, PlanView view) =>
        new(response, space, _setup.Study.Targets, _setup.Study.ProtocolFor(response), _setup.MegReported, _setup.MegNames.Count > 0, view)
        {
            WeightingGain = _setup.Study.Noise?.SpreadBetweenTrials is { } spread ? Math.Exp(4 * spread * spread) : null,
        };

    private Waveform? Course(Response response) => response.Waveform switch
    {
        OscillationChoice o => new WindowedOscillation(o.Frequency, o.Cycles),
        GaussianChoice g => new GaussianPulse(g.Width),
        WaveformFileChoice => _setup.Waveforms[response.Key],
        _ => null,
    };

    private double? Samples(Response response, double? samples, Modality modality)
    {
        bool read = modality == Modality.Eeg ? Space.Reference is not null : _setup.MegReported;
        int rank = read ? Space.Rank(modality) : 0;
        return samples is { } nu && read && nu <= rank + 1
            ? throw new InputException(null, response.Key + ".baseline_s", string.Create(CultureInfo.InvariantCulture,
                $"twice the bandwidth times the baseline is {nu:0.#} independent samples, from which no covariance of {rank} {Names.Of(modality)} rows can be inverted; more than {rank + 1} are needed: state a longer baseline, or fewer channels"))
            : samples;
    }
}
