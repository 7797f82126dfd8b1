using System.Globalization;

using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Noise;

/// <summary>From the noise that a study states to the noise model of its sensors.</summary>
public sealed class NoiseBuilder
{
    private readonly NoiseChoice _choice;
    private readonly int _electrodes;
    private readonly IReadOnlyList<CoilKind> _coils;
    private readonly BackgroundField? _background;
    private readonly double[]? _totalDerivation;
    private readonly List<string> _warnings = [];

    /// <param name="choice">What the study states.</param>
    /// <param name="electrodes">Number of electrodes; 0 without EEG.</param>
    /// <param name="coils">Kinds of the MEG channels; empty without MEG.</param>
    /// <param name="background">Brain field at these sensors; null where brain noise is off or the head is imported.</param>
    /// <param name="totalDerivation">Weights over the electrodes of the derivation that `eeg_total` names; null without.</param>
    public NoiseBuilder(NoiseChoice choice, int electrodes, IReadOnlyList<CoilKind> coils, BackgroundField? background, double[]? totalDerivation)
    {
        _choice = choice;
        _electrodes = electrodes;
        _coils = coils;
        _background = background;
        _totalDerivation = totalDerivation;
    }

    /// <summary>What the user must know about the noise.</summary>
    public IReadOnlyList<string> Warnings => _warnings;

    /// <summary>Brain noise is on when stated, or when `eeg_total` is given.</summary>
    public static bool WantsBrain(NoiseChoice choice) => choice.Brain ?? choice.EegTotal is not null;

    /// <summary>Table of the total EEG, scaled to the stated rms.</summary>
    public static LogLogTable TotalTable(EegTotalChoice total) =>
        DefaultNoiseTables.EegTotal.Scaled(total.Rms / DefaultNoiseTables.EegTotal.Rms(total.Band.Low, total.Band.High));

    /// <summary>Builds the model.</summary>
    /// <param name="eegCovariance">Measured EEG covariance of one trial [V^2], or null.</param>
    /// <param name="megCovariance">Measured MEG covariance of one trial, or null.</param>
    /// <param name="responses">Responses, whose bands the noise must make sense in.</param>
    /// <exception cref="InputException">Instrument and brain exceed the stated total over a response's band.</exception>
    public NoiseModel Build(double[]? eegCovariance, double[]? megCovariance, IReadOnlyList<Response> responses)
    {
        double[]? eegPerTrial = eegCovariance ?? (_choice.EegRms is { } e ? Diagonal(_electrodes, e) : null);
        double[]? megPerTrial = megCovariance ?? (_choice.MegRms is { } m ? Diagonal(_coils.Count, m) : null);
        bool spectralEeg = _electrodes > 0 && eegPerTrial is null, spectralMeg = _coils.Count > 0 && megPerTrial is null;
        var terms = new List<INoiseTerm>();
        if (spectralEeg || spectralMeg)
        {
            var instrument = new InstrumentNoise(
                spectralEeg ? [.. Enumerable.Repeat(_choice.EegDensity ?? 0, _electrodes)] : null,
                spectralMeg ? [.. _coils.Select(k => (k == CoilKind.PlanarGradiometer ? _choice.MegPlanarDensity : _choice.MegDensity) ?? 0)] : null);
            terms.Add(instrument);
            LogLogTable? total = spectralEeg && _choice.EegTotal is { } stated ? TotalTable(stated) : null;
            if (_background is { } field)
            {
                terms.Add(new BrainNoise(spectralEeg ? field.Eeg : null, spectralMeg ? field.Meg : null, field.Columns,
                    DefaultNoiseTables.EegBrain, DefaultNoiseTables.MegBrain, f => Dominates(f, total)));
            }

            if (total is not null)
            {
                terms.Add(Remainder(total, terms));
                foreach (Response response in responses)
                {
                    CheckRemainder(total, terms, response);
                }
            }
            else if (_background is null && spectralEeg)
            {
                _warnings.Add("EEG noise is the instrument alone: neither noise.eeg_total, noise.brain, flat figures nor a covariance are stated; a real recording holds brain, muscle and electrode noise");
            }

            if (_background is null && spectralMeg && (spectralEeg || _electrodes == 0))
            {
                _warnings.Add("MEG noise is the sensors alone: noise.brain is off; below some 100 Hz a real recording holds the brain's own field");
            }

            foreach (Response response in responses)
            {
                WarnOutside(response, total is not null || _background is not null);
            }
        }

        return new NoiseModel
        {
            EegRows = _electrodes,
            MegRows = _coils.Count,
            Terms = terms,
            EegPerTrial = eegPerTrial,
            MegPerTrial = megPerTrial,
            EegSamples = eegCovariance is null ? null : _choice.EegCovariance?.Samples,
            MegSamples = megCovariance is null ? null : _choice.MegCovariance?.Samples,
        };
    }

    private MuscleElectrodeNoise Remainder(LogLogTable total, List<INoiseTerm> others)
    {
        double[] w = _totalDerivation!;
        double own = w.Sum(x => x * x);
        (INoiseTerm Term, double Variance)[] known = [.. others.Where(t => t.Eeg is not null).Select(t => (t, NoiseModel.UnitVariance(t.Eeg!, w)))];
        return new MuscleElectrodeNoise(_electrodes, f =>
        {
            double t = total.DensityAt(f);
            return (t * t - known.Sum(k => k.Term.At(f).Eeg * k.Variance)) / own;
        }, [.. total.Frequencies, .. known.SelectMany(k => k.Term.Breakpoints)]);
    }

    private void CheckRemainder(LogLogTable total, List<INoiseTerm> terms, Response response)
    {
        INoiseTerm remainder = terms[^1];
        (double low, double high) = (response.Band.Low, response.Band.High);
        double left = BandIntegral.Of(f => remainder.At(f).Eeg, low, high, remainder.Breakpoints);
        if (left >= 0)
        {
            return;
        }

        (string Name, double Variance)[] known = [.. terms.SkipLast(1).Where(t => t.Eeg is not null).Select(t =>
            (t.Name, BandIntegral.Of(f => t.At(f).Eeg, low, high, t.Breakpoints) * NoiseModel.UnitVariance(t.Eeg!, _totalDerivation!)))];
        string parts = string.Join(", ", known.Select(k => string.Create(CultureInfo.InvariantCulture, $"{k.Name} {Si.ToMicrovolts(Math.Sqrt(k.Variance)):0.###} uV")));
        // The stated rms scales a table of fixed shape: so much of it would just hold what is known.
        EegTotalChoice stated = _choice.EegTotal!;
        double enough = stated.Rms * Math.Sqrt(known.Sum(k => k.Variance)) / total.Rms(low, high);
        throw new InputException(null, "noise.eeg_total.rms_uV", string.Create(CultureInfo.InvariantCulture,
            $"over the band of {response.Name}, {low:0.###} to {high:0.###} Hz, the stated total comes to {Si.ToMicrovolts(total.Rms(low, high)):0.###} uV rms in {stated.Derivation}, less than what is in it ({parts}); nothing is left for muscle and electrodes: state what you measure, above {Si.ToMicrovolts(enough):0.##} uV here, or noise.brain: none if your participants' brains are quieter than the default tables"));
    }

    // The brain dominates a modality where it has more power than everything else together, in the tables' own reading.
    private bool Dominates(double f, LogLogTable? total)
    {
        double eegBrain = Square(DefaultNoiseTables.EegBrain.DensityAt(f)), megBrain = Square(DefaultNoiseTables.MegBrain.DensityAt(f));
        double eegRest = total is not null ? Square(total.DensityAt(f)) - eegBrain : 1.5 * Square(_choice.EegDensity ?? 0);
        double megRest = Square(_choice.MegDensity ?? 0);
        return eegBrain > eegRest && megBrain > megRest;
    }

    private void WarnOutside(Response response, bool tables)
    {
        IReadOnlyList<double> known = DefaultNoiseTables.EegTotal.Frequencies;
        if (tables && (response.Band.Low < known[0] || response.Band.High > known[^1]))
        {
            _warnings.Add(string.Create(CultureInfo.InvariantCulture,
                $"{response.Name}: the band {response.Band.Low:0.###} to {response.Band.High:0.###} Hz leaves the noise tables ({known[0]:0} to {known[^1]:0} Hz); their end slopes are extended"));
        }
    }

    private static double Square(double x) => x * x;

    private static double[] Diagonal(int n, double rms)
    {
        var matrix = new double[n * n];
        for (int k = 0; k < n; k++)
        {
            matrix[k * n + k] = rms * rms;
        }

        return matrix;
    }
}
