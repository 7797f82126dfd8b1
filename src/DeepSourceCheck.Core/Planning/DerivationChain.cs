using System.Globalization;

using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Planning;

/// <summary>The lines from moment to minutes for one verdict, from the values that the run used. Recomputing them gives N exactly.</summary>
internal sealed class DerivationChain(EvaluationPlan plan, NoiseModel noise, LeadfieldMethod method)
{
    private readonly List<DerivedNumber> _lines = [];

    /// <summary>All lines.</summary>
    /// <param name="witness">Dipole and direction at the median count.</param>
    /// <param name="measure">Measure of the verdict.</param>
    /// <param name="rule">Rule.</param>
    public IReadOnlyList<DerivedNumber> Of(MedianWitness witness, IMeasure measure, ITargetRule rule)
    {
        _lines.Clear();
        Response response = plan.Response;
        Strength(response);
        Input("x", response.Together ? "centroid of the regions, which act together" : $"place of the dipole at the median count (point {witness.Point})", Si.ToMm(witness.Position.X), "mm", "region");
        Input("y", "", Si.ToMm(witness.Position.Y), "mm", "region");
        Input("z", "", Si.ToMm(witness.Position.Z), "mm", "region");
        bool oriented = witness.Direction != Vec3.Zero;
        if (oriented)
        {
            string source = "responses.direction: " + Names.Of(response.Direction.Name);
            Input("ux", "direction of the dipole", witness.Direction.X, "", source);
            Input("uy", "", witness.Direction.Y, "", source);
            Input("uz", "", witness.Direction.Z, "", source);
        }

        if (plan.IsSpectral)
        {
            Add("c", "noise of the convention: none, a filter in time reads the whole waveform", 1, "", "1", "known signal in noise", Grade.Derived);
            Add("E", $"energy of the waveform of peak 1 after filter and jitter: {plan.View.Waveform!.Description}", plan.View.Waveform.Energy, "s", "", "2 integral |A(f)|^2 df over the response's band, " + Jitter(), Grade.Derived);
        }
        else
        {
            Add("c", $"noise of the convention, {(response.Measured == Measured.PeakToTrough ? "peak-to-trough: difference of two points" : "baseline-to-peak: one point")}",
                Math.Sqrt(plan.NoiseFactor), "", response.Measured == Measured.PeakToTrough ? "sqrt(2)" : "1", "variance of a difference of independent values", Grade.Derived);
        }

        bool less = plan.View.Kept != 1 && !plan.IsSpectral;
        if (less && response.Amplitude is null)
        {
            Kept();
        }

        switch (measure)
        {
            case DerivationMeasure or BestChannelMeasure:
                Reading(measure.Modality, witness, measure, "");
                Add("P", "power SNR of one trial", witness.Power, "", "(A / (c s))^2", "definition", Grade.Derived);
                break;
            case PairMeasure when oriented:
                Reading(Modality.Eeg, witness, measure, "e");
                Reading(Modality.Meg, witness, measure, "m");
                double rho = Correlation(witness, (PairMeasure)measure);
                if (plan.Space.ChannelPairs is not null)
                {
                    var pair = (PairMeasure)measure;
                    (double U, double W)[] table = pair.DerivationIndex >= 0 ? plan.Space.DerivationPairs! : plan.Space.ChannelPairs;
                    (double u, double w) = witness.MegRow == Vec3.Zero ? (1, 1) : table[(pair.DerivationIndex >= 0 ? pair.DerivationIndex : witness.EegChannel) * plan.Space.MegSd.Length + witness.MegChannel];
                    const string source = "integral |A(f)|^2 C(f)^-1 df of the two readings' noise";
                    Add("k", "regression of the MEG reading on the EEG reading", rho, "", "", source, Grade.Derived);
                    Add("pu", "weight of the EEG reading", u, "", "", source, Grade.Derived);
                    Add("pw", "weight of what the MEG reading adds", w, "", "", source, Grade.Derived);
                    Add("P", "d^2 of one trial, both readings together", witness.Power, "", "(pu Ae/se)^2 + (pw (Am/sm - k Ae/se))^2", "filter in time and over two channels", Grade.Derived);
                    break;
                }

                Add("k", "correlation of the noise of the two readings", rho, "", "", "noise of the study: covariance over both standard deviations", Grade.Derived);
                Add("P", "power SNR of one trial, both readings together", witness.Power, "",
                    "((Ae/se)^2 + (Am/sm)^2 - 2 k (Ae/se) (Am/sm)) / ((1 - k^2) c^2)", "matched filter of two channels", Grade.Derived);
                break;
            default:
                if (measure is RealisticFilterMeasure)
                {
                    Errors(witness);
                }

                Add("q", measure is RealisticFilterMeasure ? "power of that filter at unit moment, (w'b)^2 / (w' C w)"
                    : measure is MatchedFilterMeasure ? "filter power at unit moment, b' C^-1 b" : "largest power over directions at unit moment",
                    witness.Power * plan.NoiseFactor / (plan.ReadMoment * plan.ReadMoment) * 1e-18, "1/nAm^2", "",
                    (plan.IsSpectral ? "4 integral |A(f)|^2 b' C(f)^-1 b df; whitened leadfield of this dipole" : "matched filter; whitened leadfield of this dipole") + HeldOut(measure), Grade.Derived);
                Add("P", plan.IsSpectral ? "d^2 of one trial" : "power SNR of one trial", witness.Power, "", less ? "(a kp)^2 q / c^2" : "a^2 q / c^2", "definition", Grade.Derived);
                break;
        }

        Add("SNR", "the same in decibels", RegionReport.Decibels(witness.Power), "dB", "10 log10(P)", "Goldenholz et al. 2009", Grade.Memory);
        _lines.AddRange(rule.Chain(witness.Power, witness.Artefact, witness.InverseVariance));
        double trials = _lines.Last(l => l.Symbol == "N").Value;
        if (plan.Protocol is { } protocol && double.IsFinite(trials))
        {
            Input("r", "stimuli per second", protocol.Rate, "1/s", "protocol.rate_per_s");
            Input("f", "share of trials that are rejected", protocol.RejectedFraction, "", "protocol.rejected_fraction");
            Add("M", "presented trials", SessionPlan.Presented(protocol, (long)trials) ?? double.PositiveInfinity, "", "ceil(N / (1 - f))", "definition", Grade.Derived);
            Add("T", "recording time", SessionPlan.Minutes(protocol, trials), "min", "N / (60 r (1 - f))", "definition", Grade.Derived);
            if (protocol.Conditions * protocol.Replications > 1 || protocol.Breaks is not null || protocol.Preparation is not null)
            {
                Input("nc", "conditions", protocol.Conditions, "", "protocol.conditions");
                Input("nr", "replications of each", protocol.Replications, "", "protocol.replications");
                Input("tb", "breaks", (protocol.Breaks ?? 0) / 60, "min", "protocol.breaks_min");
                Input("tp", "preparation", (protocol.Preparation ?? 0) / 60, "min", "protocol.preparation_min");
                Add("H", "time in the chair", SessionPlan.ChairMinutes(protocol, trials), "min", "T nc nr + tb + tp", "definition", Grade.Derived);
            }
        }

        return [.. _lines];
    }

    private void Kept()
    {
        Add("kp", $"share of the peak that {(plan.View.Waveform is { } w ? $"filter and jitter leave: {w.Description}" : "the jitter leaves")}", plan.View.Kept, "", "",
            (plan.View.Waveform is null ? "exp(-(2 pi f sigma)^2 / 2) at the response's frequency, " : "largest value of the waveform inside the response's band, ") + Jitter(), Grade.Derived);
    }

    private void Strength(Response response)
    {
        double moment = Si.ToNanoAmpereMetres(response.Moment);
        if (response.Amplitude is { } known)
        {
            double peak = Si.ToMicrovolts(known.Peak);
            Input("A0", $"amplitude known at {known.Derivation}", peak, "uV", "responses.amplitude.peak_uV");
            bool less = plan.View.Kept != 1;
            if (less)
            {
                Kept();
            }

            Add("g0", $"leadfield at {known.Derivation}: median of its size over dipoles and directions", peak / (moment * plan.View.Kept), "uV/nAm", "", method.Eeg, Grade.Derived);
            Add("a", $"dipole moment that reads it{(less ? ", at its peak before filter and jitter" : "")}", moment, "nAm", less ? "A0 / (g0 kp)" : "A0 / g0", "linearity", Grade.Derived);
        }
        else if (response.Density is { } density)
        {
            Input("D", "moment density", density.MomentDensity * 1000, "nAm/mm2", "responses.density.nAm_per_mm2");
            Input("S", "active area", density.Area * 1e6, "mm2", "responses.density.area_mm2");
            Input("o", "open-field fraction", density.OpenField, "", "responses.density.open_field");
            Add("a", "dipole moment", moment, "nAm", "D S o", "net moment of a sheet", Grade.Derived);
        }
        else
        {
            Input("a", response.MomentRange is null ? "dipole moment" : "dipole moment, typical", moment, "nAm", "responses.moment_nAm");
        }
    }

    private string Jitter() => string.Create(CultureInfo.InvariantCulture, $"latency jitter sigma = {plan.View.Jitter * 1000:0.######} ms");

    private void Errors(MedianWitness witness)
    {
        FilterErrors errors = plan.View.Errors!;
        Vec3 d = errors.Displacements[witness.Draw];
        string draw = string.Create(CultureInfo.InvariantCulture, $"draw {witness.Draw + 1} of {FilterErrors.Draws} of the filter's errors");
        Input("dx", "the filter was built for a place off by (where the head admits it)", Si.ToMm(d.X), "mm", "responses.place_error_mm, " + draw);
        Input("dy", "", Si.ToMm(d.Y), "mm", draw);
        Input("dz", "", Si.ToMm(d.Z), "mm", draw);
        foreach ((Modality modality, double? samples) in new[] { (Modality.Eeg, errors.EegSamples), (Modality.Meg, errors.MegSamples) })
        {
            if (samples is { } nu && witness.Read.Modality != (modality == Modality.Eeg ? Modality.Meg : Modality.Eeg))
            {
                Input(modality == Modality.Eeg ? "ne" : "nm", $"independent samples behind its {Names.Of(modality)} covariance", nu, "", "covariance samples, or 2 x bandwidth x responses.baseline_s");
            }
        }
    }

    private double Correlation(MedianWitness witness, PairMeasure pair)
    {
        if (witness.MegRow == Vec3.Zero)
        {
            return 0;                                           // a silent reading adds nothing, as in the run
        }

        double[]? table = pair.DerivationIndex >= 0 ? plan.Space.DerivationCorrelation : plan.Space.ChannelCorrelation;
        int row = pair.DerivationIndex >= 0 ? pair.DerivationIndex : witness.EegChannel;
        return table is null ? 0 : table[row * plan.Space.MegSd.Length + witness.MegChannel];
    }

    private void Reading(Modality modality, MedianWitness witness, IMeasure measure, string suffix)
    {
        bool eeg = modality == Modality.Eeg;
        int derivation = measure switch { DerivationMeasure d => d.Index, PairMeasure p => p.DerivationIndex, _ => -1 };
        string channel = !eeg ? plan.Space.MegNames[witness.MegChannel]
            : derivation >= 0 ? plan.Space.Derivations!.Names[derivation] : plan.Space.EegNames[witness.EegChannel];
        double sd = !eeg ? plan.Space.MegSd[witness.MegChannel] : derivation >= 0 ? plan.Space.DerivationSd[derivation] : plan.Space.EegSd[witness.EegChannel];
        bool planar = !eeg && plan.Space.MegKinds[witness.MegChannel] == CoilKind.PlanarGradiometer;
        (string unit, double perSi) = eeg ? ("uV", 1e6) : planar ? ("fT/cm", 1e13) : ("fT", 1e15);
        Vec3 row = (eeg ? witness.EegRow : witness.MegRow) * (sd * perSi * 1e-9);
        string field = eeg ? method.Eeg : method.Meg;
        string perMoment = unit + "/nAm";
        Add("gx" + suffix, $"leadfield at {channel} for a dipole along x", row.X, perMoment, "", field, Grade.Derived);
        Add("gy" + suffix, "along y", row.Y, perMoment, "", field, Grade.Derived);
        Add("gz" + suffix, "along z", row.Z, perMoment, "", field, Grade.Derived);
        double g = Vec3.Dot(row, witness.Direction);
        Add("g" + suffix, $"leadfield at {channel} along the direction", g, perMoment, $"gx{suffix} ux + gy{suffix} uy + gz{suffix} uz", "projection", Grade.Derived);
        Add("A" + suffix, $"amplitude at {channel}", Si.ToNanoAmpereMetres(plan.ReadMoment) * g, unit, $"a g{suffix}{(plan.View.Kept != 1 && !plan.IsSpectral ? " kp" : "")}", "linearity", Grade.Derived);
        if (plan.IsSpectral)
        {
            double deviation = sd * perSi;
            Add("S" + suffix, $"noise density at {channel} as the waveform weighs it", 2 * plan.View.Waveform!.Energy * deviation * deviation, unit + "^2/Hz", "",
                "E over 2 integral |A(f)|^2 / S(f) df, S the noise of the study", Grade.Derived);
            Add("s" + suffix, $"noise of one trial at {channel} against a waveform of peak 1", deviation, unit, $"sqrt(S{suffix} / (2 E))", "d^2 = 2 E A^2 / S", Grade.Derived);
            return;
        }


        double[]? weights = !eeg ? null : derivation >= 0 ? plan.Space.Derivations!.Weights(derivation) : plan.Space.Reference!.Weights(plan.Space.EegChannels[witness.EegChannel]);
        Band band = plan.Response.Band;
        string range = plan.Response.Steady is { } steady ? string.Create(CultureInfo.InvariantCulture, $"bin of {1 / steady.Seconds:0.###} Hz at {steady.Frequency:0.###} Hz")
            : string.Create(CultureInfo.InvariantCulture, $"{band.Low:0.###} to {band.High:0.###} Hz");
        IReadOnlyList<(string Cause, double Variance)> causes = noise.Contributions(weights, witness.MegChannel, plan.Response);
        var symbols = new List<string>();
        foreach ((string cause, double variance) in causes)
        {
            string symbol = "v" + (symbols.Count + 1).ToString(CultureInfo.InvariantCulture) + suffix;
            symbols.Add(symbol);
            Add(symbol, $"noise variance at {channel}, {range}: {cause}", variance * perSi * perSi, unit + "^2", "", eeg ? NoiseSource(band) : "noise of the study", Grade.Derived);
        }

        Add("s" + suffix, $"noise of one trial at {channel}", sd * perSi, unit, $"sqrt({string.Join(" + ", symbols)})", "independent causes add", Grade.Derived);
    }

    private string NoiseSource(Band band) => noise.Recorded(band) is not { } recorded ? "noise of the study" : string.Create(CultureInfo.InvariantCulture,
        $"recording {recorded.File}: {recorded.SecondsUsed:0.##} of {recorded.SecondsRead:0.##} s used, {100 * recorded.RejectedShare:0.#} % of {recorded.Segments} segments rejected, {recorded.IndependentSamples:0} independent samples, shrunk by {recorded.Shrinkage:0.####} (Ledoit and Wolf 2004)");

    private string HeldOut(IMeasure measure) => measure is not RealisticFilterMeasure && measure.Modality != Modality.Meg && noise.Recorded(plan.Response.Band) is { } recorded
        ? string.Create(CultureInfo.InvariantCulture, $"; EEG times {recorded.HeldOutShare:0.####}, what filters from half of the recording reach on the other half") : "";

    private void Input(string symbol, string name, double value, string unit, string key) => _lines.Add(new(symbol, name, value, unit, "", key, null));

    private void Add(string symbol, string name, double value, string unit, string formula, string source, Grade? grade) =>
        _lines.Add(new(symbol, name, value, unit, formula, source, grade));
}
