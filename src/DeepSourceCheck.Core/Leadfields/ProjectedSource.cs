using System.Buffers;

using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Leadfields;

/// <summary>Leadfields after an operator on their MEG rows: what an array reads once the room's spatial terms are taken out of it.</summary>
public sealed class ProjectedSource : ILeadfieldSource
{
    private readonly ChannelOperator _meg;

    /// <param name="inner">Leadfields of the channels as they are.</param>
    /// <param name="meg">Operator over the MEG rows, as many outputs as inputs.</param>
    public ProjectedSource(ILeadfieldSource inner, ChannelOperator meg)
    {
        if (meg.Inputs != inner.MegRows || meg.Outputs != inner.MegRows)
        {
            throw new ArgumentException($"An operator from {meg.Inputs} to {meg.Outputs} channels does not act on {inner.MegRows} MEG rows.", nameof(meg));
        }

        Inner = inner;
        _meg = meg;
        Method = inner.Method with { Meg = inner.Method.Meg + "; after removal of the room's homogeneous fields and gradients" };
    }

    /// <summary>Leadfields of the channels as they are.</summary>
    public ILeadfieldSource Inner { get; }

    /// <inheritdoc/>
    public int EegRows => Inner.EegRows;

    /// <inheritdoc/>
    public int MegRows => Inner.MegRows;

    /// <inheritdoc/>
    public LeadfieldMethod Method { get; }

    /// <inheritdoc/>
    public double? PositionStep => Inner.PositionStep;

    /// <inheritdoc/>
    public SupportCounts? Supports(ReadOnlyMemory<Vec3> positions, CancellationToken cancellation) => Inner.Supports(positions, cancellation);

    /// <inheritdoc/>
    public void Fill(LeadfieldBlock block)
    {
        Inner.Fill(block);
        double[] projected = ArrayPool<double>.Shared.Rent(block.Meg.Length);
        _meg.Apply(block.Meg, projected);
        projected.AsSpan(0, block.Meg.Length).CopyTo(block.Meg);
        ArrayPool<double>.Shared.Return(projected);
    }
}
