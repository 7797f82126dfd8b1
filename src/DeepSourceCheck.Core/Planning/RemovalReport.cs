using System.Globalization;
using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Planning;

/// <summary>A study before the room's terms are taken out.</summary>
/// <param name="Source">Leadfields of the channels as they are.</param>
/// <param name="Quiet">Noise in a room without any of its own.</param>
/// <param name="LeftIn">Noise with the room's terms left in.</param>
public sealed record RemovalBaseline(ILeadfieldSource Source, NoiseModel Quiet, NoiseModel LeftIn);

// RemovalReport.cs - what the projection costs and gains, region by region.
//   The same dipoles are read three times: projected, at the channels as they are in a room without noise, and with the room's noise left in. Each reading is a
//   median over dipoles and the direction's set, as in the tables; a large region is read at evenly picked dipoles. Where the verdict's direction is silent in
//   MEG the strongest tangential one is read instead.

/// <summary>Measures the loss of a projection.</summary>
internal sealed class RemovalReport(StudySetup setup, EvaluationPlan plan)
{
    private const int MostDipoles = 4096;

    /// <summary>The loss in one region; null where MEG sees nothing of it.</summary>
    /// <param name="region">The region, or the one source of regions that act together.</param>
    /// <param name="projected">Its leadfields as the run reads them.</param>
    /// <param name="plain">Its leadfields at the channels as they are.</param>
    /// <param name="cancellation">Stops between dipoles.</param>
    public RemovalLoss? Of(FilledRegion region, ILeadfieldSource projected, ILeadfieldSource plain, CancellationToken cancellation)
    {
        RemovalBaseline baseline = setup.Removal!;
        DirectionName asked = plan.Directions.Contains(plan.Response.Direction.Name) ? plan.Response.Direction.Name : DirectionName.Isotropic;
        foreach (DirectionName direction in new[] { asked, DirectionName.StrongestTangential }.Distinct())
        {
            (double Filter, double Best) now = Read(plan.Space, region, projected, direction, cancellation);
            (double Filter, double Best) quiet = Read(Space(baseline.Quiet), region, plain, direction, cancellation);
            (double Filter, double Best) left = Read(Space(baseline.LeftIn), region, plain, direction, cancellation);
            if (now.Best > 0 && quiet.Best > 0 && left.Best > 0)
            {
                return new(direction, Db(now.Filter / quiet.Filter), Db(now.Best / quiet.Best), Db(now.Filter / left.Filter), Db(now.Best / left.Best));
            }
        }

        return null;
    }

    /// <summary>The loss in words.</summary>
    public static string Words(string region, RemovalLoss loss)
    {
        string direction = loss.Direction == DirectionName.StrongestTangential ? "strongest tangential direction" : loss.Direction == DirectionName.Given ? "given direction" : $"{Names.Of(loss.Direction)} direction";
        return $"{region}: taking the room's terms out changes the power SNR of its MEG by {Signed(loss.MatchedFilterDb)} dB (matched filter) and {Signed(loss.BestChannelDb)} dB (best channel) "
            + $"against a room without noise, by {Signed(loss.MatchedFilterAgainstLeftInDb)} and {Signed(loss.BestChannelAgainstLeftInDb)} dB against leaving them in (median, {direction})";
    }

    private SignalSpace Space(NoiseModel noise) => new(noise.InBand(plan.Response.Band.Low, plan.Response.Band.High), null, null, setup.MegNames, setup.MegKinds);

    // Medians of the matched filter's and the best channel's power at unit moment.
    private (double Filter, double Best) Read(SignalSpace space, FilledRegion region, ILeadfieldSource source, DirectionName direction, CancellationToken cancellation)
    {
        int dipoles = region.Positions.Length, every = (dipoles + MostDipoles - 1) / MostDipoles;
        int[] picked = [.. Enumerable.Range(0, (dipoles + every - 1) / every).Select(k => k * every)];
        var own = new EvaluationPlan(plan.Response, space, [], null, megReported: true, splitPossible: true);
        var block = new LeadfieldBlock(source.EegRows, source.MegRows);
        var signals = new BlockSignals(space, setup.Head, megReported: true);
        var reader = new BlockReader(own);
        var filter = new MatchedFilterMeasure(Modality.Meg);
        var best = new BestChannelMeasure(space, Modality.Meg);
        List<double> filters = [], bests = [];
        for (int from = 0; from < picked.Length; from += LeadfieldBlock.Lanes)
        {
            cancellation.ThrowIfCancellationRequested();
            int[] some = picked[from..Math.Min(from + LeadfieldBlock.Lanes, picked.Length)];
            block.Load([.. some.Select(k => region.Positions[k])], region.SourceIndices.Length == 0 ? default : [.. some.Select(k => region.SourceIndices[k])]);
            source.Fill(block);
            signals.Load(block);
            (DirectionMode mode, LaneDirection[] directions) = reader.DirectionsOf(direction, signals);
            foreach (LaneDirection u in directions)
            {
                signals.Ask(mode, u);
                Vector512<double> f = filter.Power(signals), b = best.Power(signals);
                for (int lane = 0; lane < some.Length; lane++)
                {
                    filters.Add(f[lane]);
                    bests.Add(b[lane]);
                }
            }
        }

        return (Median(filters), Median(bests));
    }

    // An undefined direction is NaN and sorts first: it counts as silent.
    private static double Median(List<double> values)
    {
        values.Sort();
        double middle = values[values.Count / 2];
        return double.IsNaN(middle) ? 0 : middle;
    }

    private static double Db(double ratio) => 10 * Math.Log10(ratio);

    private static string Signed(double db) => (Math.Round(db, 1) + 0.0).ToString("+0.0;-0.0;0.0", CultureInfo.InvariantCulture);
}
