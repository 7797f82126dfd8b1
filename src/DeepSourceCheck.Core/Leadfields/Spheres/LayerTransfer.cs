using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Numerics;

namespace DeepSourceCheck.Core.Leadfields.Spheres;

// LayerTransfer.cs - what a layered sphere does to each degree of the Legendre series.
//   Unit current enters at the electrode (direction e on the outer surface, radius R) and leaves evenly over the surface. By reciprocity its
//   potential at r0 is that of the electrode per unit of current at r0, with mean zero over the surface:
//     Phi(r0) = sum_(n>=1) T_n x^v1 P_n(cos), x = |r0|/r_1, cos = r0.e/|r0|
//   In layer j the radial part is a (r/r_j)^v + b (r/r_(j-1))^-(v+1), v = (sqrt(1 + 4 n(n+1) s_t/s_r) - 1)/2.
//   With y = s_r r u'/u (continuous across boundaries), q = r_(j-1)/r_j, t = (s_r v - y)/(y + s_r (v+1)):
//     u(r_(j-1))/u(r_j) = q^v (1 + t)/(1 + t q^(2v+1))
//     y(r_j)            = s_r (v - (v+1) t q^(2v+1))/(1 + t q^(2v+1))
//     T_n               = (2n+1)/(4 pi R y(R)) * product over j > 1 of u(r_(j-1))/u(r_j)
//   Only ratios below 1 are raised to powers; each of the sums is written in a form whose terms have one sign.
// Source: radial solutions and anisotropic exponents [de Munck & Peters 1993], [Zhang 1995].

/// <summary>Degree coefficients of the surface potential of a layered sphere, once per head.</summary>
public sealed class LayerTransfer
{
    private readonly double[] _outerRadii, _radial, _ratio, _logQ;

    /// <summary>Reads the layers.</summary>
    /// <exception cref="ArgumentException">A radius does not exceed the one before it, or a radius or conductivity is not positive and finite.</exception>
    public LayerTransfer(LayeredSphere head)
    {
        int count = head.Layers.Count;
        _outerRadii = new double[count];
        _radial = new double[count];
        _ratio = new double[count];
        _logQ = new double[count];
        for (int j = 0; j < count; j++)
        {
            SphereLayer layer = head.Layers[j];
            double inside = j == 0 ? 0.0 : _outerRadii[j - 1];
            if (!(layer.OuterRadius > inside) || !double.IsFinite(layer.OuterRadius))
            {
                throw new ArgumentException($"Layer {layer.Tissue}: radius {layer.OuterRadius} m must be finite and exceed {inside} m.", nameof(head));
            }

            if (!(layer.RadialConductivity > 0 && layer.TangentialConductivity > 0)
                || !double.IsFinite(layer.RadialConductivity) || !double.IsFinite(layer.TangentialConductivity))
            {
                throw new ArgumentException($"Layer {layer.Tissue}: conductivities must be positive and finite [S/m].", nameof(head));
            }

            _outerRadii[j] = layer.OuterRadius;
            _radial[j] = layer.RadialConductivity;
            _ratio[j] = layer.TangentialConductivity / layer.RadialConductivity;
            _logQ[j] = j == 0 ? 0.0 : RatioPowers.LogOfRatio(inside, layer.OuterRadius);
        }
    }

    /// <summary>Number of layers.</summary>
    public int Layers => _outerRadii.Length;

    /// <summary>Radius of the innermost layer [m].</summary>
    public double InnerRadius => _outerRadii[0];

    /// <summary>Radius of the outer surface [m].</summary>
    public double OuterRadius => _outerRadii[^1];

    /// <summary>True when the innermost layer conducts alike in all directions, so that its exponents are the degrees themselves.</summary>
    public bool InnermostIsIsotropic => _ratio[0] == 1.0;

    /// <summary>Ratio of tangential to radial conductivity of layer <paramref name="layer"/>.</summary>
    public double Anisotropy(int layer) => _ratio[layer];

    /// <summary>ln of the ratio of inner to outer radius of layer <paramref name="layer"/>; 0 for the innermost.</summary>
    public double LogRadiusRatio(int layer) => _logQ[layer];

    /// <summary>Smallest conductivity of all layers and directions [S/m].</summary>
    public double SmallestConductivity
    {
        get
        {
            double smallest = double.PositiveInfinity;
            for (int j = 0; j < _radial.Length; j++)
            {
                smallest = Math.Min(smallest, _radial[j] * Math.Min(1.0, _ratio[j]));
            }

            return smallest;
        }
    }

    /// <summary>Exponent v of the growing radial solution of degree <paramref name="n"/> in a layer; exactly n where the layer is isotropic.</summary>
    public double Exponent(int layer, int n)
    {
        double product = n * (n + 1.0) * _ratio[layer];
        return _ratio[layer] == 1.0 ? n : 2.0 * product / (1.0 + Math.Sqrt(1.0 + 4.0 * product));
    }

    /// <summary>T_n [V/A]: potential on the outer surface per unit of current, degree <paramref name="n"/> >= 1.</summary>
    public double Coefficient(int n)
    {
        double y = _radial[0] * Exponent(0, n);
        double chain = 1.0;
        for (int j = 1; j < _outerRadii.Length; j++)
        {
            double v = Exponent(j, n), s = _radial[j];
            double sum = y + s * (v + 1.0);
            double t = (s * v - y) / sum;
            double onePlusT = s * (2.0 * v + 1.0) / sum;
            double power = Math.Exp((2.0 * v + 1.0) * _logQ[j]);
            double lost = RatioPowers.OneMinusExp((2.0 * v + 1.0) * _logQ[j]);
            double denominator, numerator;
            if (t >= 0)
            {
                denominator = 1.0 + t * power;
                numerator = y * (2.0 * v + 1.0) / sum + (v + 1.0) * t * lost;
            }
            else
            {
                denominator = onePlusT - t * lost;
                numerator = v - (v + 1.0) * t * power;
            }

            chain *= Math.Exp(v * _logQ[j]) * onePlusT / denominator;
            y = s * numerator / denominator;
        }

        return (2.0 * n + 1.0) / (4.0 * Math.PI * OuterRadius * y) * chain;
    }
}
