using DeepSourceCheck.Core.Attribution;
using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Planning;

/// <summary>Which electrodes carry a response: the greedy choice and the best differences of two, over the fields of its region and direction.</summary>
/// <remarks>
/// All recorded electrodes take part, those too that only serve as reference or in a derivation. A covariance from finitely many samples costs a filter of few electrodes less than
/// one of many: the counts say so.
/// </remarks>
internal sealed class ElectrodeReport(StudySetup setup, EvaluationPlan plan, NoiseCovariance noise)
{
    private const int MostElectrodes = 32, MostDerivations = 5, MostDipoles = 256, MostDirections = 16;

    /// <summary>The choice; null without EEG or with a single electrode.</summary>
    /// <param name="region">The region, or the one source of regions that act together.</param>
    /// <param name="source">Its leadfields.</param>
    /// <param name="cancellation">Stops between blocks.</param>
    public SensorChoiceResult? Of(FilledRegion region, ILeadfieldSource source, CancellationToken cancellation)
    {
        int electrodes = noise.EegRows;
        if (setup.Reference is null || electrodes < 2)
        {
            return null;
        }

        var directions = new FieldDirections(plan);
        int[] picked = Picked.Of(region, MostDipoles);
        double[] fields = Fields(region, source, directions, picked, electrodes, cancellation);
        if (fields.Length == 0)
        {
            return null;
        }

        var search = new ElectrodeSearch(noise.Eeg, fields, electrodes);
        IReadOnlyList<string> names = setup.Reference.Names;
        List<ElectrodeStep> steps = [.. search.Greedy(MostElectrodes).Select((chosen, k) =>
        {
            double power = k == 0 ? 0 : Median(chosen.Powers) * SignalSpace.Correction(noise.EegSamples, k);
            return new ElectrodeStep(names[chosen.Electrode], Db(power), Trials(Names.MatchedFilter, k, power));
        })];
        List<ElectrodePair> pairs = [.. search.Pairs().Take(MostDerivations).Select(p =>
        {
            double[] powers = search.Pair(p.A, p.B);
            string name = $"{names[p.A]}-{names[p.B]}";
            return new ElectrodePair(name, Db(Median(powers)), Trials(name, 1, Median(powers)));
        })];
        return new SensorChoiceResult(directions.Name, picked.Length, steps, pairs);
    }

    // [electrode][field], in V over the noise of the convention for the stated moment.
    private double[] Fields(FilledRegion region, ILeadfieldSource source, FieldDirections directions, int[] picked, int electrodes, CancellationToken cancellation)
    {
        var columns = new List<double[]>();
        var block = new LeadfieldBlock(source.EegRows, source.MegRows);
        var signals = new BlockSignals(plan.Space, setup.Head, plan.MegReported);
        double gain = Math.Sqrt(plan.Gain);
        for (int from = 0; from < picked.Length; from += LeadfieldBlock.Lanes)
        {
            cancellation.ThrowIfCancellationRequested();
            int count = Picked.Load(block, region, picked.AsSpan(from, Math.Min(LeadfieldBlock.Lanes, picked.Length - from)));
            source.Fill(block);
            signals.Load(block);
            foreach (LaneDirection u in directions.Of(signals, MostDirections))
            {
                for (int lane = 0; lane < count; lane++)
                {
                    if (double.IsNaN(u.X[lane]))
                    {
                        continue;
                    }

                    var column = new double[electrodes];
                    for (int k = 0; k < electrodes; k++)
                    {
                        int at = LeadfieldBlock.At(k, 0) + lane;
                        column[k] = gain * (block.Eeg[at] * u.X[lane] + block.Eeg[at + LeadfieldBlock.Lanes] * u.Y[lane] + block.Eeg[at + 2 * LeadfieldBlock.Lanes] * u.Z[lane]);
                    }

                    columns.Add(column);
                }
            }
        }

        var fields = new double[electrodes * columns.Count];
        for (int k = 0; k < electrodes; k++)
        {
            for (int s = 0; s < columns.Count; s++)
            {
                fields[k * columns.Count + s] = columns[s][k];
            }
        }

        return fields;
    }

    // Rules that say nothing of such a reading, or that stand on the noise of one channel, are left out.
    private List<(string Rule, long? Trials)> Trials(string measure, int rows, double power)
    {
        RuleReading reading = new(Modality.Eeg, measure, Math.Max(1, rows), NoiseFactor: plan.NoiseFactor) { WindowPerPeak = plan.WindowPerPeak, SteadyState = plan.Response.Steady is not null };
        return
        [
            .. Enumerable.Range(0, plan.Targets.Count).Where(plan.Counts).Select(r => RuleBinding.Of(plan.Targets[r], reading)).Where(rule => rule.Absent is null && !rule.StandsOnNoise)
                .Select(rule => (rule.Name, rows > 0 && power > 0 ? TrialCount.Ceiling(rule.Trials(rule.EffectivePower(power, 0))) : null)),
        ];
    }

    // Nearest rank from the top, as counts are read everywhere.
    private static double Median(double[] powers)
    {
        double[] sorted = [.. powers.OrderDescending()];
        return sorted[Math.Clamp((int)Math.Ceiling(0.5 * sorted.Length - 1e-9) - 1, 0, sorted.Length - 1)];
    }

    private static double? Db(double power) => power > 0 ? RegionReport.Decibels(power) : null;
}
