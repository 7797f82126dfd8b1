namespace DeepSourceCheck.Core.Leadfields;

/// <summary>A head that can be perturbed, seen through the removal of the room's terms.</summary>
/// <param name="inner">The head.</param>
/// <param name="removal">Removal over the MEG channels: it belongs to the array, which stays as it is when the head moves in it.</param>
public sealed class ProjectedHead(IPerturbableHead inner, ChannelOperator removal) : IPerturbableHead
{
    /// <inheritdoc/>
    public double? SkullRatio => inner.SkullRatio;

    /// <summary>Distance of the array from the scalp [m]: null, since another gap is another array with another removal.</summary>
    public double? Gap => null;

    /// <inheritdoc/>
    public ILeadfieldSource Perturbed(HeadPerturbation perturbation) => new ProjectedSource(inner.Perturbed(perturbation), removal);
}
