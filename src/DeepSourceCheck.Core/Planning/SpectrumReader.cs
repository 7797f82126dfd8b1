using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Planning;

/// <summary>Noise over frequency at the readings on which the first region's verdicts stand, by cause, with the predicted response beside it.</summary>
internal sealed class SpectrumReader(StudySetup setup, EvaluationPlan plan)
{
    /// <summary>Frequencies of a spectrum.</summary>
    public const int Points = 40;

    // Shown from 1 Hz to the end of the default tables, and the response's band wherever it lies.
    private const double ShownFrom = 1, ShownTo = 3000, LowestShown = 1e-3;

    /// <summary>EEG, then MEG; none where a modality is not reported.</summary>
    /// <param name="region">Results of the first region.</param>
    public IReadOnlyList<ReadingSpectrum> Of(RegionResult region)
    {
        DirectionName direction = plan.Directions.Contains(plan.Response.Direction.Name) ? plan.Response.Direction.Name : DirectionName.Isotropic;
        var spectra = new List<ReadingSpectrum>();
        foreach ((Modality modality, string? measure) in new[] { (Modality.Eeg, plan.EegMeasure), (Modality.Meg, plan.MegMeasure) })
        {
            if (measure is not null)
            {
                PeakAmplitude? peak = region.Find(modality, direction, measure)?.Peak;
                string channel = peak?.Channel ?? region.Find(modality, DirectionName.Best, measure)?.Peak?.Channel ?? First(modality);
                spectra.Add(Read(modality, channel, peak));
            }
        }

        return spectra;
    }

    private string First(Modality modality) => modality == Modality.Meg ? plan.Space.MegNames[0] : plan.Space.Derivations?.Names[0] ?? plan.Space.EegNames[0];

    private ReadingSpectrum Read(Modality modality, string channel, PeakAmplitude? peak)
    {
        bool eeg = modality == Modality.Eeg;
        int megChannel = eeg ? -1 : plan.Space.MegNames.ToList().IndexOf(channel);
        double[]? weights = eeg ? Weights(channel) : null;
        (string unit, double perSi) = eeg ? ("uV", Si.ToMicrovolts(1))
            : plan.Space.MegKinds[megChannel] == CoilKind.PlanarGradiometer ? ("fT/cm", Si.ToFemtoteslaPerCm(1)) : ("fT", Si.ToFemtotesla(1));
        Band band = plan.Response.Band;
        NoiseModel noise = setup.Noise!;
        IReadOnlyList<(string Cause, double Variance)> inBand = noise.Contributions(weights, megChannel, band.Low, band.High);
        double all = inBand.Sum(c => c.Variance);
        bool stated = inBand.Count == 1 && NoiseModel.IsWhole(inBand[0].Cause);
        double[] frequencies = Frequencies(band, stated);
        IReadOnlyList<(string Cause, double[] Power)> spectra = stated
            ? [(inBand[0].Cause, [.. frequencies.Select(_ => all / band.Width)])] : noise.Spectra(weights, megChannel, frequencies);
        bool[] known = [.. frequencies.Select(f => stated || Known(eeg, f))];
        double?[] Densities(Func<int, double> power) => [.. frequencies.Select((_, k) => known[k] && power(k) > 0 ? perSi * Math.Sqrt(power(k)) : (double?)null)];
        return new ReadingSpectrum
        {
            Modality = modality,
            Channel = channel,
            Unit = unit + "/sqrt(Hz)",
            Frequencies = frequencies,
            Noise = [.. spectra.Select((s, n) => new NoiseCurve(s.Cause, inBand[n].Variance / all, Densities(k => s.Power[k])))],
            Total = Densities(k => spectra.Sum(s => s.Power[k])),
            Band = band,
            Bandwidth = eeg ? setup.Study.EegBandwidth : setup.Study.MegBandwidth,
            SignalLevel = peak is null ? null : peak.Value / Math.Sqrt(plan.NoiseFactor * band.Width),
        };
    }

    private double[] Weights(string channel)
    {
        int derivation = plan.Space.Derivations?.Names.ToList().IndexOf(channel) ?? -1;
        return derivation >= 0 ? plan.Space.Derivations!.Weights(derivation) : plan.Space.Reference!.Weights(plan.Space.Reference.Names.ToList().IndexOf(channel));
    }

    // Outside the tables nothing is drawn but within the response's band, where the run itself extends them and says so.
    private bool Known(bool eeg, double frequency) =>
        (frequency >= plan.Response.Band.Low && frequency <= plan.Response.Band.High) || setup.Noise!.Known(eeg).All(k => frequency >= k.From && frequency <= k.To);

    private static double[] Frequencies(Band band, bool bandAlone)
    {
        double lowest = band.Low > 0 ? band.Low : Math.Max(LowestShown, band.High / 1000);
        double from = bandAlone ? lowest : Math.Min(ShownFrom, lowest), to = bandAlone ? band.High : Math.Max(ShownTo, band.High);
        return [.. Enumerable.Range(0, Points).Select(k => k == 0 ? from : k == Points - 1 ? to : from * Math.Pow(to / from, k / (Points - 1.0)))];
    }
}
