using System.Globalization;

using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Noise.Recordings;
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
    private readonly BrainTables _tables;
    private readonly IReadOnlyList<MegChannel>? _channels;
    private readonly List<string> _warnings = [];

    /// <param name="choice">What the study states.</param>
    /// <param name="electrodes">Number of electrodes; 0 without EEG.</param>
    /// <param name="coils">Kinds of the MEG channels; empty without MEG.</param>
    /// <param name="background">Brain field at these sensors; null where brain noise is off or the head is imported.</param>
    /// <param name="totalDerivation">Weights over the electrodes of the derivation that `eeg_total` names; null without.</param>
    /// <param name="tables">The brain's tables before the study's factor; null for the default ones.</param>
    /// <param name="channels">The MEG channels with their places, for the room's noise; null where it is not stated.</param>
    public NoiseBuilder(
        NoiseChoice choice, int electrodes, IReadOnlyList<CoilKind> coils, BackgroundField? background, double[]? totalDerivation,
        BrainTables? tables = null, IReadOnlyList<MegChannel>? channels = null)
    {
        _tables = (tables ?? BrainTables.Default).Scaled(choice.BrainScale);
        _channels = channels;
        _choice = choice;
        _electrodes = electrodes;
        _coils = coils;
        _background = background;
        _totalDerivation = totalDerivation;
    }

    /// <summary>What the user must know about the noise.</summary>
    public IReadOnlyList<string> Warnings => _warnings;

    /// <summary>The room's noise at the channels; null where none is stated. Where it is removed it is no part of the model.</summary>
    public EnvironmentNoise? Environment => _choice.Environment is { } room && _channels is { Count: > 0 } ? new(_channels, room.Density, room.Corner) : null;

    /// <summary>Brain noise is on when stated, or when `eeg_total` is given.</summary>
    public static bool WantsBrain(NoiseChoice choice) => choice.Brain ?? choice.EegTotal is not null;

    /// <summary>Table of the total EEG, scaled to the stated rms.</summary>
    public static LogLogTable TotalTable(EegTotalChoice total) =>
        DefaultNoiseTables.EegTotal.Scaled(total.Rms / DefaultNoiseTables.EegTotal.Rms(total.Band.Low, total.Band.High));

    /// <summary>Builds the model.</summary>
    /// <param name="eegCovariance">Measured EEG covariance of one trial [V^2], or null.</param>
    /// <param name="megCovariance">Measured MEG covariance of one trial, or null.</param>
    /// <param name="responses">Responses, whose bands the noise must make sense in.</param>
    /// <param name="eegRecorded">EEG noise from a recording in the responses' bands; null or empty for none.</param>
    /// <exception cref="InputException">Instrument and brain exceed the stated total over a response's band.</exception>
    public NoiseModel Build(double[]? eegCovariance, double[]? megCovariance, IReadOnlyList<Response> responses, IReadOnlyList<RecordedNoise>? eegRecorded = null)
    {
        double[]? eegPerTrial = eegCovariance ?? (_choice.EegRms is { } e ? Diagonal(_electrodes, e) : null);
        double[]? megPerTrial = megCovariance ?? (_choice.MegRms is { } m ? Diagonal(_coils.Count, m) : null);
        bool spectralEeg = _electrodes > 0 && eegPerTrial is null && eegRecorded is not { Count: > 0 }, spectralMeg = _coils.Count > 0 && megPerTrial is null;
        var terms = new List<INoiseTerm>();
        if (spectralEeg || spectralMeg)
        {
            var instrument = new InstrumentNoise(
                spectralEeg ? [.. Enumerable.Repeat(_choice.EegDensity ?? 0, _electrodes)] : null,
                spectralMeg ? MegDensities() : null, _choice.EegCorner, _choice.MegCorner);
            terms.Add(instrument);
            LogLogTable? total = spectralEeg && _choice.EegTotal is { } stated ? TotalTable(stated) : null;
            if (_background is { } field)
            {
                EnvironmentNoise? left = _choice.Environment is { Removed: false } ? Environment : null;
                terms.Add(new BrainNoise(spectralEeg ? field.Eeg : null, spectralMeg ? field.Meg : null, field.Columns,
                    _tables.Eeg, _tables.Meg, Dominance(field, total, left)));
            }

            if (spectralMeg && Environment is { } room && !_choice.Environment!.Removed)
            {
                terms.Add(room);
            }

            if (total is not null)
            {
                MuscleElectrodeNoise remainder = Remainder(total, terms);
                foreach (Response response in responses)
                {
                    CheckRemainder(total, terms, remainder, response);
                }

                terms.Add(remainder);
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
                WarnOutside(response, total, spectralEeg, spectralMeg);
                WarnOfCorner(response, spectralEeg, spectralMeg);
            }
        }

        return new NoiseModel
        {
            EegRows = _electrodes,
            MegRows = _coils.Count,
            Terms = terms,
            MegOperator = spectralMeg && _choice.Environment is { Removed: true } && _channels is { Count: > 0 } ? Removal(_channels) : null,
            EegPerTrial = eegPerTrial,
            EegRecorded = eegRecorded ?? [],
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
        }, [.. total.Frequencies, .. known.SelectMany(k => k.Term.Breakpoints)], (total.KnownFrom, total.KnownTo));
    }

    private double[] MegDensities() => [.. _coils.Select(k => MegDensity(k) ?? 0)];

    private ChannelOperator Removal(IReadOnlyList<MegChannel> channels)
    {
        if (channels.Count <= EnvironmentNoise.Terms)
        {
            throw new InputException(null, "noise.environment.removed", string.Create(CultureInfo.InvariantCulture,
                $"{EnvironmentNoise.Terms} spatial terms cannot be taken out of {channels.Count} channels and leave a signal; state more channels, or removed: false"));
        }

        ChannelOperator removal = TermRemoval.Of(channels, MegDensities(), out int removed);
        _warnings.Add(removed == 0
            ? "noise.environment.removed takes nothing out: the array sees none of the room's homogeneous fields and gradients"
            : string.Create(CultureInfo.InvariantCulture, $"MEG stands on {channels.Count - removed} of {channels.Count} degrees of freedom: {removed} of the room's {EnvironmentNoise.Terms} spatial terms are seen by the array and taken out of signal and noise"));
        return removal;
    }

    private void CheckRemainder(LogLogTable total, List<INoiseTerm> terms, MuscleElectrodeNoise remainder, Response response)
    {
        (double low, double high) = (response.Band.Low, response.Band.High);
        double left = BandIntegral.Of(f => remainder.At(f).Eeg, low, high, remainder.Breakpoints);
        if (left >= 0)
        {
            return;
        }

        (string Name, double Variance)[] known = [.. terms.Where(t => t.Eeg is not null).Select(t =>
            (t.Name, BandIntegral.Of(f => t.At(f).Eeg, low, high, t.Breakpoints) * NoiseModel.UnitVariance(t.Eeg!, _totalDerivation!)))];
        string parts = string.Join(", ", known.Select(k => string.Create(CultureInfo.InvariantCulture, $"{k.Name} {Si.ToMicrovolts(Math.Sqrt(k.Variance)):0.###} uV")));
        // The stated rms scales a table of fixed shape: so much of it would just hold what is known; or so much of the brain would just fit in it.
        EegTotalChoice stated = _choice.EegTotal!;
        double all = Math.Pow(total.Rms(low, high), 2), brain = known.Where(k => k.Name == "brain").Sum(k => k.Variance), rest = known.Sum(k => k.Variance) - brain;
        double enough = stated.Rms * Math.Sqrt((brain + rest) / all);
        double fits = brain > 0 && all > rest ? Math.Floor(100 * _choice.BrainScale * Math.Sqrt((all - rest) / brain)) / 100 : 0;
        string quieter = fits > 0
            ? string.Create(CultureInfo.InvariantCulture, $", or, if your participants' brains are quieter than the tables, write noise.brain: {{scale: {fits:0.##}}} or less, which holds for EEG and MEG, or give tables of your own (noise.brain: {{eeg_table: f.csv}}), or noise.brain: none")
            : brain > 0 && all > rest ? ", or noise.brain: none if your participants' brains are quieter than the tables"
            : ", or a quieter amplifier under noise.eeg_sensor_nV_per_rtHz, whose noise alone is more than the total";
        throw new InputException(null, "noise.eeg_total.rms_uV", string.Create(CultureInfo.InvariantCulture,
            $"over the band of {response.Name}, {low:0.###} to {high:0.###} Hz, the stated total comes to {Si.ToMicrovolts(Math.Sqrt(all)):0.###} uV rms in {stated.Derivation}, less than what is in it ({parts}); nothing is left for muscle and electrodes: state what you measure, above {Si.ToMicrovolts(enough):0.##} uV rms over {stated.Band.Low:0.###} to {stated.Band.High:0.###} Hz{quieter}"));
    }

    // The brain dominates a modality where it has more power than everything else together: EEG in the tables' derivation, MEG on average over the array's channels.
    private Func<double, bool> Dominance(BackgroundField field, LogLogTable? total, EnvironmentNoise? room)
    {
        double[] brain = Variances(field.Meg, field.Columns), outside = Variances(room?.Meg?.Factor, EnvironmentNoise.Terms), own = [.. MegDensities().Select(Square)];
        return f => DominatesEeg(f, total) && DominatesMeg(f);

        bool DominatesMeg(double f)
        {
            double power = Square(_tables.Meg.DensityAt(f)), instrument = InstrumentNoise.Power(_choice.MegCorner, f), around = room?.At(f).Meg ?? 0, ratio = 0;
            for (int k = 0; k < _coils.Count; k++)
            {
                ratio += power * brain[k] / (instrument * own[k] + around * outside[k]);
            }

            return ratio > _coils.Count;
        }
    }

    private bool DominatesEeg(double f, LogLogTable? total)
    {
        double brain = Square(_tables.Eeg.DensityAt(f));
        return brain > (total is not null ? Square(total.DensityAt(f)) - brain : 1.5 * Square(_choice.EegDensity ?? 0) * InstrumentNoise.Power(_choice.EegCorner, f));
    }

    private double? MegDensity(CoilKind kind) => kind == CoilKind.PlanarGradiometer ? _choice.MegPlanarDensity : _choice.MegDensity;

    // Variance of each channel at unit power.
    private double[] Variances(double[]? factor, int columns)
    {
        var variances = new double[_coils.Count];
        for (int at = 0; factor is not null && at < factor.Length; at++)
        {
            variances[at / columns] += factor[at] * factor[at];
        }

        return variances;
    }

    private void WarnOutside(Response response, LogLogTable? total, bool eeg, bool meg)
    {
        (string Name, LogLogTable Table)[] used =
        [
            .. total is { } t ? new[] { ("the table of the total EEG", t) } : [],
            .. _background is not null && eeg ? new[] { (_tables.EegName, _tables.Eeg) } : [],
            .. _background is not null && meg ? new[] { (_tables.MegName, _tables.Meg) } : [],
        ];
        (double Low, double High) band = (response.Band.Low, response.Band.High);
        foreach (var tables in used.Where(u => band.Low < u.Table.KnownFrom || band.High > u.Table.KnownTo).GroupBy(u => (u.Table.KnownFrom, u.Table.KnownTo)))
        {
            _warnings.Add(string.Create(CultureInfo.InvariantCulture,
                $"{response.Name}: the band {band.Low:0.###} to {band.High:0.###} Hz leaves {string.Join(" and ", tables.Select(u => u.Name))} ({tables.Key.KnownFrom:0.###} to {tables.Key.KnownTo:0.###} Hz), whose end slopes are extended: there the noise is a guess"));
        }
    }

    // One over f has no finite power down to 0 Hz; a high-pass is always there, and where it lies decides.
    private void WarnOfCorner(Response response, bool eeg, bool meg)
    {
        bool corner = (eeg && _choice.EegCorner > 0) || (meg && (_choice.MegCorner > 0 || _choice.Environment is { Corner: > 0, Removed: false }));
        if (corner && response.Band.Low <= 0)
        {
            _warnings.Add(string.Create(CultureInfo.InvariantCulture,
                $"{response.Name}: noise that rises below its corner has no finite power down to 0 Hz and is counted from {BandIntegral.LowestShare * response.Band.High:0.######} Hz on; state the high-pass of the recording as the band's lower edge"));
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
