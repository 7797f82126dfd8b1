using DeepSourceCheck.Core.Heads;

namespace DeepSourceCheck.Tests.References;

/// <summary>
/// Degree coefficients by integrating the radial equation itself, without its exponents: with s = ln r and f = s_r du/ds,
/// du/ds = f/s_r, df/ds = s_t n(n+1) u - f; both continuous across layers. Classical fourth-order Runge-Kutta.
/// </summary>
internal static class RadialEquation
{
    /// <summary>T_n [V/A] of <see cref="DeepSourceCheck.Core.Leadfields.Spheres.LayerTransfer"/>.</summary>
    public static double Coefficient(LayeredSphere head, int n, int stepsPerLayer = 4000)
    {
        // The regular solution of the innermost layer outgrows any other: start far inside with any positive flux.
        double inner = head.Layers[0].OuterRadius;
        double u = 1, f = head.Layers[0].RadialConductivity;
        (u, f) = Integrate(head.Layers[0], n, Math.Log(inner) - 30, Math.Log(inner), u, f, 20 * stepsPerLayer);
        (u, f) = (1, f / u);
        for (int j = 1; j < head.Layers.Count; j++)
        {
            (u, f) = Integrate(head.Layers[j], n, Math.Log(head.Layers[j - 1].OuterRadius), Math.Log(head.Layers[j].OuterRadius), u, f, stepsPerLayer);
        }

        return (2 * n + 1) / (4 * Math.PI * head.OuterRadius * f);
    }

    private static (double U, double F) Integrate(SphereLayer layer, int n, double from, double to, double u, double f, int steps)
    {
        double h = (to - from) / steps, k = layer.TangentialConductivity * n * (n + 1.0), s = layer.RadialConductivity;
        for (int i = 0; i < steps; i++)
        {
            (double u1, double f1) = (f / s, k * u - f);
            (double u2, double f2) = ((f + h / 2 * f1) / s, k * (u + h / 2 * u1) - (f + h / 2 * f1));
            (double u3, double f3) = ((f + h / 2 * f2) / s, k * (u + h / 2 * u2) - (f + h / 2 * f2));
            (double u4, double f4) = ((f + h * f3) / s, k * (u + h * u3) - (f + h * f3));
            u += h / 6 * (u1 + 2 * u2 + 2 * u3 + u4);
            f += h / 6 * (f1 + 2 * f2 + 2 * f3 + f4);
            if (u > 1e100)
            {
                (u, f) = (u * 1e-100, f * 1e-100);
            }
        }

        return (u, f);
    }
}
