using DeepSourceCheck.Core.Attribution;
using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Planning;

// LocationReport.cs - how well the session could place the response.
//   Bound of one trial at unit moment (LocationBound), times c / (a sqrt(N)) for the session's N trials and the convention's noise c;
//   reported: sqrt(bound^2 + model error^2). The bound is that of noise alone and of a perfect model: no method places better, the model error is what heads add.
//   Model errors: mean over 32 dipoles in a skull phantom, EEG 7 to 8 mm (the upper one is taken), MEG 3 mm [Leahy et al. 1998]. A joint fit weighs the two by
//   their noise, not by their models: with w = (1/B_e^2) / (1/B_e^2 + 1/B_m^2) its model error is sqrt(w^2 g_e^2 + (1-w)^2 g_m^2), independent errors, one number an axis.

/// <summary>Location bounds of one region.</summary>
internal sealed class LocationReport(StudySetup setup, EvaluationPlan plan)
{
    private const double EegModelError = 0.008, MegModelError = 0.003;
    private const string ModelSource = "skull phantom, mean over 32 dipoles: EEG 7 to 8 mm, MEG 3 mm; Leahy et al. 1998";

    private const int MostDipoles = 64, MostDirections = 16;

    /// <summary>The bounds.</summary>
    /// <param name="region">The region.</param>
    /// <param name="source">Its leadfields.</param>
    /// <param name="cancellation">Stops between dipoles.</param>
    public LocationResult Of(FilledRegion region, ILeadfieldSource source, CancellationToken cancellation)
    {
        var directions = new FieldDirections(plan);
        double? radius = setup.Head.Radius;
        if (plan.SessionTrials is not > 0 and var trials)
        {
            return new(trials, directions.Name, 0, radius, [], "the study states no session: a bound needs a number of trials");
        }

        if (source.PositionStep is null)
        {
            return new(plan.SessionTrials, directions.Name, 0, radius, [], source is SummedSource
                ? "regions act together: they are no single dipole with a place" : "leadfields are given point by point: how they change with place is not known");
        }

        Modality[] modalities = [.. new[] { Modality.Eeg, Modality.Meg, Modality.Both }.Where(m => (m == Modality.Meg || plan.Space.Reference is not null) && (m == Modality.Eeg || plan.MegReported))];
        int[] picked = Picked.Of(region, MostDipoles);
        var place = new PositionDerivative(source, setup.Head);
        var signals = new BlockSignals(plan.Space, setup.Head, plan.MegReported);
        var white = modalities.Select(m => new WhitenedLeadfield(plan.Space, m)).ToArray();
        var values = modalities.Select(_ => new List<double>()).ToArray();
        int read = 0;
        foreach (int dipole in picked)
        {
            cancellation.ThrowIfCancellationRequested();
            if (!place.Fill(region.Positions[dipole]))
            {
                continue;
            }

            read++;
            signals.Load(place.Block);
            Vec3[] set = [.. directions.Of(signals, MostDirections).Select(u => new Vec3(u.X[0], u.Y[0], u.Z[0])).Where(u => u.IsFinite)];
            for (int m = 0; m < modalities.Length; m++)
            {
                var leadfield = new double[3 * white[m].Rows];
                var derivative = new double[9 * white[m].Rows];
                place.Read(white[m].Of(place.Block), leadfield, derivative);
                var bound = new LocationBound(leadfield, derivative);
                values[m].AddRange(set.Select(bound.Error));
            }
        }

        if (values.All(v => v.Count == 0))
        {
            return new(plan.SessionTrials, directions.Name, read, radius, [], read == 0 ? "no dipole lies far enough from a border for its field's change with place" : "directions are undefined at every dipole");
        }

        double one = Math.Sqrt(1 / plan.Gain), root = Math.Sqrt(plan.SessionTrials!.Value);
        var bounds = new List<LocationReading>();
        for (int m = 0; m < modalities.Length; m++)
        {
            double[] sorted = [.. values[m].Select(v => v * one).Order()];
            double model = modalities[m] switch
            {
                Modality.Eeg => EegModelError,
                Modality.Meg => MegModelError,
                _ => Joint(Middle(values[0]), Middle(values[1])),
            };
            Percentiles bound = Of(sorted, v => v / root), error = Of(sorted, v => Math.Sqrt(v * v / (root * root) + model * model));
            bool localisable = bound.P50 is { } b && (radius is null || b <= radius);
            bounds.Add(new LocationReading(modalities[m], bound, model, error, localisable, Chain(At(sorted, 0.5), bound, model, error)));
        }

        return new(plan.SessionTrials, directions.Name, read, radius, bounds, null);
    }

    private IReadOnlyList<DerivedNumber> Chain(double oneTrial, Percentiles bound, double model, Percentiles error) => bound.P50 is not { } b ? [] :
    [
        new("d", "bound of the location from one trial, median over dipoles and directions", Si.ToMm(oneTrial), "mm", "", "Cramer-Rao bound for an unknown moment, Mosher et al. 1993", Grade.Memory),
        new("N", "trials of the session", plan.SessionTrials!.Value, "", "", "protocol", null),
        new("B", "bound from the session", Si.ToMm(b), "mm", "d / sqrt(N)", "independent trials", Grade.Derived),
        new("g", "error of the head's model", Si.ToMm(model), "mm", "", ModelSource, Grade.Seen),
        new("E", "location error", Si.ToMm(error.P50!.Value), "mm", "sqrt(B^2 + g^2)", "independent errors", Grade.Derived),
    ];

    private static double Joint(double eegBound, double megBound)
    {
        double ratio = eegBound / megBound, eegShare = double.IsInfinity(eegBound) ? 0 : double.IsInfinity(megBound) ? 1 : 1 / (1 + ratio * ratio);
        return Math.Sqrt(eegShare * eegShare * EegModelError * EegModelError + (1 - eegShare) * (1 - eegShare) * MegModelError * MegModelError);
    }

    private static double Middle(List<double> values) => values.Count == 0 ? double.PositiveInfinity : At([.. values.Order()], 0.5);

    private static Percentiles Of(double[] sorted, Func<double, double> map)
    {
        double? P(double share) => sorted.Length > 0 && map(At(sorted, share)) is var v && double.IsFinite(v) ? v : null;
        return new(P(0.05), P(0.25), P(0.5), P(0.75), P(0.95));
    }

    // Nearest rank: unbounded values must not spoil their neighbours, and the median is a dipole's own.
    private static double At(double[] sorted, double share) => sorted[Math.Clamp((int)Math.Ceiling(share * sorted.Length - 1e-9) - 1, 0, sorted.Length - 1)];
}
