using System.Runtime.Intrinsics;

using CsCheck;

using DeepSourceCheck.Core.Numerics;
using DeepSourceCheck.Tests.Support;

using MathNet.Numerics.LinearAlgebra;

namespace DeepSourceCheck.Tests.Core.Numerics;

/// <summary>The largest eigenvalue against a general-purpose library (MathNet.Numerics) and against hand-made matrices.</summary>
public class SymmetricEigen3Tests
{
    /// <summary>A few roundings of a backward-stable method.</summary>
    private const double Rounding = 4e-15;

    /// <summary>The library's own error comes on top.</summary>
    private const double AgainstLibrary = 2e-14;

    [Fact]
    public void Largest_OfASquare_EqualsTheLibrarys() => Gen.Select(Gen.Double[-1, 1].Array[9], Gen.Int[-30, 30]).Sample((b, exponent) =>
    {
        Matrix<double> factor = Matrix<double>.Build.Dense(3, 3, b), a = factor.Transpose() * factor;
        double expected = a.Evd(Symmetricity.Symmetric).EigenValues.Max(e => e.Real), scale = Math.Pow(10, exponent);
        double actual = SymmetricEigen3.Largest(a[0, 0] * scale, a[0, 1] * scale, a[0, 2] * scale, a[1, 1] * scale, a[1, 2] * scale, a[2, 2] * scale);
        RelativeAssert.Equal(expected * scale, actual, AgainstLibrary);
    }, iter: 1000);

    [Theory]
    [InlineData(1)]
    [InlineData(1e-300)]
    [InlineData(1e300)]
    public void Largest_OfKnownMatrices_IsExact(double scale)
    {
        RelativeAssert.Equal(3 * scale, SymmetricEigen3.Largest(scale, 0, 0, 3 * scale, 0, 2 * scale), Rounding);
        RelativeAssert.Equal(3 * scale, SymmetricEigen3.Largest(2 * scale, scale, 0, 2 * scale, 0, scale), Rounding);
        RelativeAssert.Equal(14 * scale, SymmetricEigen3.Largest(scale, 2 * scale, 3 * scale, 4 * scale, 6 * scale, 9 * scale), Rounding); // (1,2,3) (1,2,3)'
        RelativeAssert.Equal(2 * scale, SymmetricEigen3.Largest(scale, scale, 0, scale, 0, scale), Rounding);
        RelativeAssert.Equal((2 + Math.Sqrt(2)) * scale, SymmetricEigen3.Largest(2 * scale, scale, 0, 2 * scale, scale, 2 * scale), Rounding);
    }

    [Fact]
    public void Largest_WithNearlyEqualEigenvalues_KeepsItsDigits()
    {
        // Eigenvalues 1, 1 + 1e-10, 1 + 2e-10 (to first order): the arc-cosine formula would lose the difference.
        double actual = SymmetricEigen3.Largest(1 + 1e-10, 1e-10, 0, 1 + 1e-10, 0, 1 + 1e-10);
        Assert.InRange(actual, 1 + 2e-10 - 1e-15, 1 + 2e-10 + 1e-15);
    }

    [Fact]
    public void Largest_OfZeroAndOfNegativeMatrices_IsRight()
    {
        Assert.Equal(0.0, SymmetricEigen3.Largest(0, 0, 0, 0, 0, 0));
        RelativeAssert.Equal(-1, SymmetricEigen3.Largest(-2, 1, 0, -2, 0, -3), Rounding);
    }

    [Fact]
    public void Largest_OfEightMatrices_IsThatOfEachAlone()
    {
        double[] d = [1, 2, 3, 4, 5, 6, 7, 8];
        Vector512<double> v = Vector512.Create(d);
        Vector512<double> together = SymmetricEigen3.Largest(v, v * 0.5, v * v, v + v, -v, v * 3);
        for (int k = 0; k < 8; k++)
        {
            Assert.Equal(SymmetricEigen3.Largest(d[k], d[k] * 0.5, d[k] * d[k], d[k] + d[k], -d[k], d[k] * 3), together[k]);
        }
    }
}
