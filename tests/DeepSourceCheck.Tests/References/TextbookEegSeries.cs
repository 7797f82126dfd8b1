using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;

using MathNet.Numerics.LinearAlgebra;

namespace DeepSourceCheck.Tests.References;

/// <summary>
/// The slow plain twin of the EEG kernel: for every degree the boundary conditions are solved as a full linear system with the source on a shell of its own,
/// then P_n and P_n^1 are summed in the dipole's own polar coordinates. Never to be made fast.
/// </summary>
/// <remarks>
/// Potential of a point source of current at r0: sum over n of K_n(r0) P_n(cos) with -div(sigma grad u) = delta; K_n is proportional to r0^v, v the growing exponent
/// of the innermost layer, which gives the dipole: q_r (v/r0) K_n P_n + q_t (K_n/r0) P_n^1 cos(phi). Sources: [de Munck and Peters 1993], [Zhang 1995].
/// </remarks>
internal sealed class TextbookEegSeries(LayeredSphere head, int degrees)
{
    private static double Growing(SphereLayer layer, int n) =>
        (Math.Sqrt(1 + 4.0 * n * (n + 1.0) * layer.TangentialConductivity / layer.RadialConductivity) - 1) / 2;

    /// <summary>K_n(r0) on the outer surface [V/A], n = 1 to degrees; index 0 unused.</summary>
    public double[] ShellCoefficients(double r0)
    {
        double[] coefficients = new double[degrees + 1];
        for (int n = 1; n <= degrees; n++)
        {
            coefficients[n] = Solve(n, r0);
        }

        return coefficients;
    }

    /// <summary>Leadfield [V/(A m)] of a dipole off the centre, mean zero over the sphere, as (x, y, z) for each electrode.</summary>
    public Vec3[] Leadfield(Vec3 position, IReadOnlyList<Vec3> electrodes)
    {
        Vec3 offset = position - head.Centre;
        double r0 = offset.Norm;
        Vec3 radial = offset / r0;
        double[] k = ShellCoefficients(r0);
        Vec3[] result = new Vec3[electrodes.Count];
        for (int e = 0; e < electrodes.Count; e++)
        {
            Vec3 direction = (electrodes[e] - head.Centre).Unit();
            double cos = Math.Clamp(Vec3.Dot(direction, radial), -1, 1);
            Vec3 across = direction - cos * radial;
            double sin = across.Norm;
            double radialSum = 0, tangentialSum = 0;
            double p = cos, pBefore = 1, p1 = sin, p1Before = 0;
            for (int n = 1; n <= degrees; n++)
            {
                radialSum += Growing(head.Layers[0], n) * k[n] / r0 * p;
                tangentialSum += k[n] / r0 * p1;
                (p, pBefore) = (((2 * n + 1) * cos * p - n * pBefore) / (n + 1), p);
                (p1, p1Before) = (((2 * n + 1) * cos * p1 - (n + 1) * p1Before) / n, p1);
            }

            result[e] = radialSum * radial + (sin > 0 ? tangentialSum / sin * across : Vec3.Zero);
        }

        return result;
    }

    private double Solve(int n, double r0)
    {
        // Shells: [r0, r_1] of the innermost layer, then the other layers. Unknowns: core, then (growing, falling) of each shell,
        // scaled to 1 at the shell's outer and inner edge.
        int shells = head.Layers.Count;
        Matrix<double> m = Matrix<double>.Build.Dense(2 * shells + 1, 2 * shells + 1);
        Vector<double> right = Vector<double>.Build.Dense(2 * shells + 1);
        double Inner(int s) => s == 0 ? r0 : head.Layers[s - 1].OuterRadius;
        (double Value, double Flux) Growth(int s, double r)
        {
            double v = Growing(head.Layers[s], n), value = Math.Pow(r / head.Layers[s].OuterRadius, v);
            return (value, head.Layers[s].RadialConductivity * v / r * value);
        }

        (double Value, double Flux) Fall(int s, double r)
        {
            double v = Growing(head.Layers[s], n), value = Math.Pow(Inner(s) / r, v + 1);
            return (value, -head.Layers[s].RadialConductivity * (v + 1) / r * value);
        }

        double core = Growing(head.Layers[0], n);
        m[0, 0] = 1;
        m[1, 0] = core; // flux times r0 over the conductivity
        m[0, 1] = -Growth(0, r0).Value;
        m[0, 2] = -Fall(0, r0).Value;
        m[1, 1] = -Growth(0, r0).Flux * r0 / head.Layers[0].RadialConductivity;
        m[1, 2] = -Fall(0, r0).Flux * r0 / head.Layers[0].RadialConductivity;
        right[1] = (2 * n + 1) / (4 * Math.PI * r0 * head.Layers[0].RadialConductivity);
        int equation = 2;
        for (int s = 0; s + 1 < shells; s++)
        {
            double r = head.Layers[s].OuterRadius;
            double unit = r / head.Layers[s + 1].RadialConductivity;
            (m[equation, 1 + 2 * s], m[equation + 1, 1 + 2 * s]) = (Growth(s, r).Value, Growth(s, r).Flux * unit);
            (m[equation, 2 + 2 * s], m[equation + 1, 2 + 2 * s]) = (Fall(s, r).Value, Fall(s, r).Flux * unit);
            (m[equation, 3 + 2 * s], m[equation + 1, 3 + 2 * s]) = (-Growth(s + 1, r).Value, -Growth(s + 1, r).Flux * unit);
            (m[equation, 4 + 2 * s], m[equation + 1, 4 + 2 * s]) = (-Fall(s + 1, r).Value, -Fall(s + 1, r).Flux * unit);
            equation += 2;
        }

        double surface = head.OuterRadius;
        int last = shells - 1;
        m[equation, 1 + 2 * last] = Growth(last, surface).Flux * surface / head.Layers[last].RadialConductivity;
        m[equation, 2 + 2 * last] = Fall(last, surface).Flux * surface / head.Layers[last].RadialConductivity;
        Vector<double> solution = m.Solve(right);
        return solution[1 + 2 * last] + Fall(last, surface).Value * solution[2 + 2 * last];
    }
}
