using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Attribution;

/// <summary>Leadfields of one modality in units of independent noise: W L, with W C W' = I on the range of C. One a thread.</summary>
/// <remarks>
/// Where EEG and MEG share noise their joint covariance is whitened; else their whitened rows stand below each other. A covariance from finitely many samples counts by the
/// correction of <see cref="SignalSpace"/>, so that squares of these rows are powers of the matched filter.
/// </remarks>
public sealed class WhitenedLeadfield
{
    private const int Stride = 3 * LeadfieldBlock.Lanes;

    private readonly SignalSpace _space;
    private readonly bool _eeg, _meg, _joint;
    private readonly double[] _referenced, _together, _rows;
    private readonly int _eegRank;

    /// <param name="space">Channels and covariance of the response.</param>
    /// <param name="modality">EEG, MEG or both; must be among the space's.</param>
    public WhitenedLeadfield(SignalSpace space, Modality modality)
    {
        _space = space;
        _eeg = modality != Modality.Meg;
        _meg = modality != Modality.Eeg;
        _joint = modality == Modality.Both && space.JointWhitener is not null;
        int electrodes = _eeg ? space.Reference!.Outputs : 0;
        _referenced = new double[electrodes * Stride];
        _together = new double[_joint ? (electrodes + space.MegSd.Length) * Stride : 0];
        _eegRank = _eeg ? space.EegWhitener!.Rank : 0;
        Rows = _joint ? space.JointWhitener!.Rank : _eegRank + (_meg ? space.MegWhitener!.Rank : 0);
        _rows = new double[Rows * Stride];
    }

    /// <summary>Number of whitened rows.</summary>
    public int Rows { get; }

    /// <summary>The whitened rows of a block [1/(A m)], [row][axis][lane]; overwritten by the next call.</summary>
    /// <param name="block">Leadfields of up to eight dipoles, unreferenced.</param>
    public ReadOnlySpan<double> Of(LeadfieldBlock block)
    {
        if (_eeg)
        {
            _space.Reference!.Apply(block.Eeg, _referenced);
        }

        if (_joint)
        {
            _referenced.CopyTo(_together, 0);
            block.Meg.CopyTo(_together, _referenced.Length);
            _space.JointWhitener!.Apply(_together, _rows);
            return _rows;
        }

        if (_eeg)
        {
            _space.EegWhitener!.Apply(_referenced, _rows);
            Scale(_rows.AsSpan(0, _eegRank * Stride), _space.EegCorrection);
        }

        if (_meg)
        {
            _space.MegWhitener!.Apply(block.Meg, _rows.AsSpan(_eegRank * Stride));
            Scale(_rows.AsSpan(_eegRank * Stride), _space.MegCorrection);
        }

        return _rows;
    }

    private static void Scale(Span<double> rows, double power)
    {
        double factor = Math.Sqrt(Math.Max(0, power));
        for (int k = 0; power != 1 && k < rows.Length; k++)
        {
            rows[k] *= factor;
        }
    }
}
