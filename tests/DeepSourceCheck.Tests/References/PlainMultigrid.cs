using DeepSourceCheck.Core.Numerics.Multigrid;

namespace DeepSourceCheck.Tests.References;

/// <summary>Slow twin of the cycle: one right-hand side, double precision, node by node with neighbours looked up by their places. Never to be tidied into the fast code.</summary>
internal static class PlainMultigrid
{
    /// <summary>One W-cycle for b from z = 0.</summary>
    public static double[] Cycle(MultigridHierarchy levels, int level, double[] b, double[]? start = null)
    {
        StencilOperator a = levels.Operators[level];
        if (level == levels.Levels - 1)
        {
            return Inverse(a, b);
        }

        double[] z = start is null ? new double[b.Length] : (double[])start.Clone();
        for (int n = 0; n < z.Length; n++)
        {
            Relax(a, z, b, n);
        }

        double[] product = Multiply(a, z);
        double[] coarse = Restrict(levels.Transfers[level], [.. b.Select((value, n) => value - product[n])]);
        double[] correction = Cycle(levels, level + 1, coarse);
        if (level + 1 < levels.Levels - 1)
        {
            correction = Cycle(levels, level + 1, coarse, correction);
        }

        double[] fine = Prolong(levels.Transfers[level], correction);
        z = [.. z.Select((value, n) => value + fine[n])];
        for (int n = z.Length - 1; n >= 0; n--)
        {
            Relax(a, z, b, n);
        }

        return z;
    }

    /// <summary>A z.</summary>
    public static double[] Multiply(StencilOperator a, double[] z) =>
        [.. z.Select((value, n) => StencilOperator.Diagonal(a.Row(n)) * value - Neighbours(a, n).Sum(k => k.Weight * z[k.Node]))];

    private static void Relax(StencilOperator a, double[] z, double[] b, int n)
    {
        double diagonal = StencilOperator.Diagonal(a.Row(n));
        if (diagonal > 0)
        {
            z[n] = (b[n] + Neighbours(a, n).Sum(k => k.Weight * z[k.Node])) / diagonal;
        }
    }

    private static IEnumerable<(int Node, double Weight)> Neighbours(StencilOperator a, int n)
    {
        (int x, int y, int z) = a.Grid.Node(n);
        float[] row = a.Row(n).ToArray();
        for (int k = 0; k < Stencil.Size; k++)
        {
            (int dx, int dy, int dz) = Stencil.Step(k);
            if (k != Stencil.Centre && a.Grid.IndexOf(x + dx, y + dy, z + dz) is >= 0 and int other)
            {
                yield return (other, row[k]);
            }
        }
    }

    private static IEnumerable<(int Fine, int Coarse, double Weight)> Weights(GridTransfer transfer)
    {
        for (int node = 0; node < transfer.Coarse.Count; node++)
        {
            (int x, int y, int z) = transfer.Coarse.Node(node);
            float[] weights = transfer.Weights(node).ToArray();
            for (int k = 0; k < Stencil.Size; k++)
            {
                (int dx, int dy, int dz) = Stencil.Step(k);
                if (weights[k] != 0)
                {
                    yield return (transfer.Fine.IndexOf(2 * x + dx, 2 * y + dy, 2 * z + dz), node, weights[k]);
                }
            }
        }
    }

    private static double[] Restrict(GridTransfer transfer, double[] fine)
    {
        var coarse = new double[transfer.Coarse.Count];
        foreach ((int f, int c, double weight) in Weights(transfer))
        {
            coarse[c] += weight * fine[f];
        }

        return coarse;
    }

    private static double[] Prolong(GridTransfer transfer, double[] coarse)
    {
        var fine = new double[transfer.Fine.Count];
        foreach ((int f, int c, double weight) in Weights(transfer))
        {
            fine[f] += weight * coarse[c];
        }

        return fine;
    }

    /// <summary>Pseudo-inverse by the library's eigenvectors: directions without energy are left out.</summary>
    private static double[] Inverse(StencilOperator a, double[] b)
    {
        var matrix = MathNet.Numerics.LinearAlgebra.Matrix<double>.Build.Dense(b.Length, b.Length);
        for (int n = 0; n < b.Length; n++)
        {
            matrix[n, n] = StencilOperator.Diagonal(a.Row(n));
            foreach ((int other, double weight) in Neighbours(a, n))
            {
                matrix[n, other] = -weight;
            }
        }

        var eigen = ((matrix + matrix.Transpose()) / 2).Evd(MathNet.Numerics.LinearAlgebra.Symmetricity.Symmetric);
        var load = MathNet.Numerics.LinearAlgebra.Vector<double>.Build.Dense(b);
        double largest = eigen.EigenValues.Max(v => v.Real);
        var result = MathNet.Numerics.LinearAlgebra.Vector<double>.Build.Dense(b.Length);
        for (int k = 0; k < b.Length; k++)
        {
            double value = eigen.EigenValues[k].Real;
            if (value > 1e-7 * largest)
            {
                var direction = eigen.EigenVectors.Column(k);
                result += direction * (direction.DotProduct(load) / value);
            }
        }

        return result.ToArray();
    }
}
