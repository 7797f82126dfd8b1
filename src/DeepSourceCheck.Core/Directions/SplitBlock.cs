using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Leadfields;

namespace DeepSourceCheck.Core.Directions;

/// <summary>The split of directions of the eight dipoles of a block. Reused from block to block.</summary>
public sealed class SplitBlock
{
    private const int Lanes = LeadfieldBlock.Lanes;

    /// <summary>Singular values of the whitened leadfield [1/(A m)], descending, [k][lane]; exactly 0 where silent.</summary>
    public double[] SingularValues { get; } = new double[3 * Lanes];

    /// <summary>Unit vectors v1, v2, v3, [k][axis][lane], right-handed; NaN where the split is undefined.</summary>
    public double[] Directions { get; } = new double[9 * Lanes];

    /// <summary>State of each dipole.</summary>
    public SplitState[] States { get; } = new SplitState[Lanes];

    /// <summary>Singular value <paramref name="k"/> (0 to 2) of a dipole [1/(A m)].</summary>
    public double S(int k, int lane) => SingularValues[k * Lanes + lane];

    /// <summary>Direction v_(k+1) of a dipole, a unit vector.</summary>
    public Vec3 V(int k, int lane)
    {
        int at = k * 3 * Lanes + lane;
        return new(Directions[at], Directions[at + Lanes], Directions[at + 2 * Lanes]);
    }

    /// <summary>True where the array does not see direction v_(k+1): its singular value is below max(rows, 3) eps s1, and is held as exactly 0.</summary>
    public bool IsSilent(int k, int lane) => S(k, lane) == 0;

    internal void Set(int k, int lane, Vec3 v)
    {
        int at = k * 3 * Lanes + lane;
        (Directions[at], Directions[at + Lanes], Directions[at + 2 * Lanes]) = v;
    }
}
