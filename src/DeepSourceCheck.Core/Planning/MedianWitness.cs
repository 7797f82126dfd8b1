using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Planning;

/// <summary>The dipole and direction that stand at the median count: the one whose chain `why` prints.</summary>
/// <param name="Point">Name of the point.</param>
/// <param name="Position">Place [m].</param>
/// <param name="Direction">Unit vector; the zero vector where the measure has no single best direction.</param>
/// <param name="Power">Power SNR of one trial.</param>
/// <param name="Artefact">Artefact power over noise power of the convention.</param>
/// <param name="InverseVariance">1/s^2 of the EEG channel that was read [1/V^2].</param>
/// <param name="EegChannel">EEG channel that was read, counted among the used ones; -1 for none or a derivation.</param>
/// <param name="EegRow">Its leadfield over its noise [1/(A m)], one value an axis.</param>
/// <param name="MegChannel">MEG channel that was read; -1 for none.</param>
/// <param name="MegRow">Its leadfield over its noise [1/(A m)]; zero where the direction is silent.</param>
/// <param name="Read">The measure that was read: the verdict's, or the single reading that a pair falls back to where a locked artefact buries the other.</param>
internal sealed record MedianWitness(
    IMeasure Read, string Point, Vec3 Position, Vec3 Direction, double Power, double Artefact, double InverseVariance, int EegChannel, Vec3 EegRow, int MegChannel, Vec3 MegRow)
{
    /// <summary>Draw of a realistic filter's errors.</summary>
    public int Draw { get; init; }

    /// <summary>Describes what was read.</summary>
    /// <param name="plan">What is read.</param>
    /// <param name="signals">The block, with the direction asked.</param>
    /// <param name="measure">The measure that was read.</param>
    /// <param name="mode">How the direction was asked.</param>
    /// <param name="u">The direction.</param>
    /// <param name="lane">The dipole's lane in the block.</param>
    /// <param name="point">Its name.</param>
    /// <param name="position">Its place [m].</param>
    /// <param name="power">What was read: power SNR of one trial.</param>
    /// <param name="artefact">Artefact power over noise power of the convention.</param>
    /// <param name="inverseVariance">1/s^2 of the EEG channel that was read [1/V^2].</param>
    public static MedianWitness Of(
        EvaluationPlan plan, BlockSignals signals, IMeasure measure, DirectionMode mode, LaneDirection u, int lane, string point, Vec3 position, double power, double artefact,
        double inverseVariance)
    {
        int derivation = measure switch { DerivationMeasure d => d.Index, PairMeasure p => p.DerivationIndex, _ => -1 };
        bool readsEeg = measure.Modality != Modality.Meg && measure is DerivationMeasure or BestChannelMeasure or PairMeasure;
        bool readsMeg = measure.Modality != Modality.Eeg && measure is BestChannelMeasure or PairMeasure;
        int eeg = -1, meg = -1;
        Vec3 eegRow = default, megRow = default;
        if (readsEeg && measure.Modality != Modality.Meg)
        {
            if (derivation < 0)
            {
                signals.BestChannel(Modality.Eeg, out Vector512<double> index);
                eeg = (int)index[lane];
            }

            eegRow = signals.ReadingRow(Modality.Eeg, derivation, eeg, lane);
        }

        if (readsMeg)
        {
            Vector512<double> audible = signals.BestChannel(Modality.Meg, out Vector512<double> index);
            meg = (int)index[lane];
            megRow = audible[lane] > 0 ? signals.ReadingRow(Modality.Meg, -1, meg, lane) : default;     // silent: zero, not its rounding
        }

        Vec3 direction = mode != DirectionMode.Best ? new(u.X[lane], u.Y[lane], u.Z[lane])
            : measure is DerivationMeasure or BestChannelMeasure ? (measure.Modality == Modality.Eeg ? eegRow : megRow).Unit() : default;
        return new MedianWitness(measure, point, position, direction, power, artefact, inverseVariance, eeg, eegRow, meg, megRow);
    }
}
