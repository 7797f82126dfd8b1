using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Detection;

/// <content>Filters that were built for something else.</content>
public sealed partial class BlockSignals
{
    private MisbuiltFilter? _misbuilt;

    /// <summary>The wrong filters; null where none are asked for.</summary>
    internal MisbuiltFilter? Misbuilt => _misbuilt;

    /// <summary>Makes realistic filters be built beside the channels.</summary>
    /// <param name="errors">What is wrong about them.</param>
    internal void Build(FilterErrors errors) => _misbuilt = new MisbuiltFilter(errors, _space, _head, _megReported, this);

    /// <summary>(w'b)^2/(w' C w) of the filters that were loaded last.</summary>
    public Vector512<double> RealisticFilter(Modality modality)
    {
        MisbuiltFilter filter = _misbuilt ?? throw new InvalidOperationException("Realistic filters were asked for without being built.");
        Vector512<double> power = _mode == DirectionMode.Best ? filter.Largest(modality) : filter.Power(modality, _direction);
        return modality == Modality.Meg ? power & _audible : power;
    }

    /// <summary>Whitened rows [1/(A m)], three axes a row; of an estimated covariance less what makes its inverse too large.</summary>
    /// <param name="modality">EEG, MEG or both together.</param>
    /// <param name="rows">Receives them; made longer where needed.</param>
    internal void Whitened(Modality modality, ref Vector512<double>[] rows)
    {
        int count = 3 * _space.Rank(modality);
        if (rows.Length < count)
        {
            rows = new Vector512<double>[count];
        }

        if (modality == Modality.Both && _space.JointWhitener is not null)
        {
            Lanes.View(_jointWhite)[..count].CopyTo(rows);
            return;
        }

        int done = 0;
        if (modality != Modality.Meg)
        {
            done = Copy(_eegWhite, _space.Rank(Modality.Eeg), _space.EegCorrection / _space.KeptByFilter(Modality.Eeg), rows, done);
        }

        if (modality != Modality.Eeg)
        {
            Copy(_megWhite, _space.Rank(Modality.Meg), _space.MegCorrection / _space.KeptByFilter(Modality.Meg), rows, done);
        }

        static int Copy(double[] from, int rank, double power, Vector512<double>[] to, int at)
        {
            ReadOnlySpan<Vector512<double>> white = Lanes.View(from);
            Vector512<double> scale = Vector512.Create(Math.Sqrt(power));
            for (int k = 0; k < 3 * rank; k++)
            {
                to[at + k] = scale * white[k];
            }

            return at + 3 * rank;
        }
    }
}
