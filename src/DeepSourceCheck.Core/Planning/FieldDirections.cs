using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Planning;

/// <summary>Directions for figures that need a vector: the verdict's, or where that is `best`, which has none, the strongest tangential one (without a split: all).</summary>
/// <param name="plan">What is read.</param>
internal sealed class FieldDirections(EvaluationPlan plan)
{
    private readonly BlockReader _reader = new(plan);

    /// <summary>What is read.</summary>
    public DirectionName Name { get; } = plan.VerdictDirection != DirectionName.Best ? plan.VerdictDirection
        : plan.Directions.Contains(DirectionName.StrongestTangential) ? DirectionName.StrongestTangential : DirectionName.Isotropic;

    /// <summary>The directions of a loaded block, evenly picked from their set; lanes without a split are NaN.</summary>
    /// <param name="signals">Channels of the block.</param>
    /// <param name="most">Largest number.</param>
    public LaneDirection[] Of(BlockSignals signals, int most)
    {
        LaneDirection[] all = _reader.DirectionsOf(Name, signals).Directions;
        int every = Math.Max(1, (all.Length + most - 1) / most);
        return [.. all.Where((_, k) => k % every == 0)];
    }
}
