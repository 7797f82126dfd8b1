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

        Add("c", $"noise of the convention, {(response.Measured == Measured.PeakToTrough ? "peak-to-trough: difference of two points" : "baseline-to-peak: one point")}",
            Math.Sqrt(plan.NoiseFactor), "", response.Measured == Measured.PeakToTrough ? "sqrt(2)" : "1", "variance of a difference of independent values", Grade.Derived);
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
                Add("k", "correlation of the noise of the two readings", rho, "", "", "noise of the study: covariance over both standard deviations", Grade.Derived);
                Add("P", "power SNR of one trial, both readings together", witness.Power, "",
                    "((Ae/se)^2 + (Am/sm)^2 - 2 k (Ae/se) (Am/sm)) / ((1 - k^2) c^2)", "matched filter of two channels", Grade.Derived);
                break;
            default:
                Add("q", measure is MatchedFilterMeasure ? "filter power at unit moment, b' C^-1 b" : "largest power over directions at unit moment",
                    witness.Power * plan.NoiseFactor / (response.Moment * response.Moment) * 1e-18, "1/nAm^2", "", FilterSource(measure.Modality, response.Band), Grade.Derived);
                Add("P", "power SNR of one trial", witness.Power, "", "a^2 q / c^2", "definition", Grade.Derived);
                break;
        }

        Add("SNR", "the same in decibels", RegionReport.Decibels(witness.Power), "dB", "10 log10(P)", "Goldenholz et al. 2009", Grade.Memory);
        _lines.AddRange(rule.Chain(witness.Power, witness.Artefact, witness.InverseVariance));
        if (plan.Protocol is { } protocol && double.IsFinite(_lines[^1].Value))
        {
            double trials = _lines[^1].Value;
            Input("r", "stimuli per second", protocol.Rate, "1/s", "protocol.rate_per_s");
            Input("f", "share of trials that are rejected", protocol.RejectedFraction, "", "protocol.rejected_fraction");
            Add("M", "presented trials", trials / (1 - protocol.RejectedFraction), "", "N / (1 - f)", "definition", Grade.Derived);
            Add("T", "recording time", SessionPlan.Minutes(protocol, trials), "min", "N / (60 r (1 - f))", "definition", Grade.Derived);
        }

        return [.. _lines];
    }

    private void Strength(Response response)
    {
        double moment = Si.ToNanoAmpereMetres(response.Moment);
        if (response.Amplitude is { } known)
        {
            double peak = Si.ToMicrovolts(known.Peak);
            Input("A0", $"amplitude known at {known.Derivation}", peak, "uV", "responses.amplitude.peak_uV");
            Add("g0", $"leadfield at {known.Derivation}: median of its size over dipoles and directions", peak / moment, "uV/nAm", "", method.Eeg, Grade.Derived);
            Add("a", "dipole moment that reads it", moment, "nAm", "A0 / g0", "linearity", Grade.Derived);
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
        Add("A" + suffix, $"amplitude at {channel}", Si.ToNanoAmpereMetres(plan.Response.Moment) * g, unit, $"a g{suffix}", "linearity", Grade.Derived);

        double[]? weights = !eeg ? null : derivation >= 0 ? plan.Space.Derivations!.Weights(derivation) : plan.Space.Reference!.Weights(plan.Space.EegChannels[witness.EegChannel]);
        Band band = plan.Response.Band;
        string range = string.Create(CultureInfo.InvariantCulture, $"{band.Low:0.###} to {band.High:0.###} Hz");
        IReadOnlyList<(string Cause, double Variance)> causes = noise.Contributions(weights, witness.MegChannel, band.Low, band.High);
        var symbols = new List<string>();
        foreach ((string cause, double variance) in causes)
        {
            string symbol = "v" + (symbols.Count + 1).ToString(CultureInfo.InvariantCulture) + suffix;
            symbols.Add(symbol);
            Add(symbol, $"noise variance at {channel}, {range}: {cause}", variance * perSi * perSi, unit + "^2", "", eeg ? NoiseSource(band) : "noise of the study", Grade.Derived);
        }

        Add("s" + suffix, $"noise of one trial at {channel}", sd * perSi, unit, $"sqrt({string.Join(" + ", symbols)})", "independent causes add", Grade.Derived);
    }

    private string NoiseSource(Band band) => noise.Recorded(band.Low, band.High) is not { } recorded ? "noise of the study" : string.Create(CultureInfo.InvariantCulture,
        $"recording {recorded.File}: {recorded.SecondsUsed:0.##} of {recorded.SecondsRead:0.##} s used, {100 * recorded.RejectedShare:0.#} % of {recorded.Segments} segments rejected, {recorded.IndependentSamples:0} independent samples, shrunk by {recorded.Shrinkage:0.####} (Ledoit and Wolf 2004)");

    private string FilterSource(Modality modality, Band band) => "matched filter; whitened leadfield of this dipole"
        + (modality != Modality.Meg && noise.Recorded(band.Low, band.High) is { } recorded
            ? string.Create(CultureInfo.InvariantCulture, $"; EEG times {recorded.HeldOutShare:0.####}, what filters from half of the recording reach on the other half") : "");

    private void Input(string symbol, string name, double value, string unit, string key) => _lines.Add(new(symbol, name, value, unit, "", key, null));

    private void Add(string symbol, string name, double value, string unit, string formula, string source, Grade? grade) =>
        _lines.Add(new(symbol, name, value, unit, formula, source, grade));
}
