using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Numerics;

namespace DeepSourceCheck.Core.Directions;

// DirectionSplit.cs - the directions that an array sees most and least.
//   Whitened leadfield L (m x 3) = U S V'; v3, the weakest, is the quasi-radial direction, v1 and v2 span the tangential plane.
//   QR to R, then one-sided Jacobi on R: never L'L, which loses singular values below 1e-8 s1.
//   Signs: v1's largest component positive; v3 away from the head's centre, or, where the head defines no outside, its largest component positive;
//   v2 = v3 x v1.
// Source: [Huang et al. 2007].

/// <summary>Splits the directions at each dipole by what an array sees of them.</summary>
public static class DirectionSplit
{
    /// <summary>Neighbouring singular values closer than this share of the largest leave their directions arbitrary in their plane.</summary>
    public const double DegenerateGap = 1e-8;

    /// <summary>Distance from 1 to the next double.</summary>
    private const double Epsilon = 2.220446049250313e-16;

    /// <summary>Splits one block.</summary>
    /// <param name="whitened">MEG rows divided by their noise standard deviations [1/(A m)], [row][axis][lane].</param>
    /// <param name="rows">Number of rows m; 0 gives undefined splits.</param>
    /// <param name="block">The block that the rows belong to, for its positions.</param>
    /// <param name="head">Head, for its centre and outside.</param>
    /// <param name="result">Overwritten in all eight lanes.</param>
    public static void Compute(ReadOnlySpan<double> whitened, int rows, LeadfieldBlock block, IHead head, SplitBlock result)
    {
        TriangularFactor r = TriangularFactor.Of(whitened, rows);
        SingularTriple.Of(r, result.SingularValues, result.Directions);
        double silence = Math.Max(rows, 3) * Epsilon;
        for (int lane = 0; lane < LeadfieldBlock.Lanes; lane++)
        {
            double s1 = result.S(0, lane);
            for (int k = 1; k < 3; k++)
            {
                ref double s = ref result.SingularValues[k * LeadfieldBlock.Lanes + lane];
                s = s < silence * s1 ? 0.0 : s;
            }

            Vec3 position = block.Positions[lane];
            if (!(s1 > 0) || head.IsSymmetryCentre(position))
            {
                result.States[lane] = SplitState.Undefined;
                Vec3 none = new(double.NaN, double.NaN, double.NaN);
                result.Set(0, lane, none);
                result.Set(1, lane, none);
                result.Set(2, lane, none);
                continue;
            }

            double gap = Math.Min(s1 - result.S(1, lane), result.S(1, lane) - result.S(2, lane));
            result.States[lane] = gap < DegenerateGap * s1 ? SplitState.Degenerate : SplitState.Ok;
            Vec3 v1 = LargestComponentPositive(result.V(0, lane)), v3 = result.V(2, lane);
            double outward = head.Outward(position) is { } normal ? Vec3.Dot(v3, normal) : 0.0;
            v3 = outward == 0 ? LargestComponentPositive(v3) : outward < 0 ? -v3 : v3;
            result.Set(0, lane, v1);
            result.Set(1, lane, Vec3.Cross(v3, v1));
            result.Set(2, lane, v3);
        }
    }

    private static Vec3 LargestComponentPositive(Vec3 v)
    {
        double x = Math.Abs(v.X), y = Math.Abs(v.Y), z = Math.Abs(v.Z);
        double largest = x >= y && x >= z ? v.X : y >= z ? v.Y : v.Z;
        return largest < 0 ? -v : v;
    }
}
