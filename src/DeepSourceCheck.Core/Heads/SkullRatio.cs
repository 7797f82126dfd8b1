namespace DeepSourceCheck.Core.Heads;

// SkullRatio.cs - the innermost conductivity over the skull's.
//   Layers whose name holds `skull` lie in series along the radius: bulk = sum t_k / sum (t_k / sigma_k) with thickness t_k and radial conductivity sigma_k; one layer is its own bulk.
//   Another ratio multiplies every skull conductivity, radial and tangential, by one factor.

/// <summary>The ratio of brain to skull conductivity of a layered sphere.</summary>
public static class SkullRatio
{
    /// <summary>The ratio, without unit; null where no layer but the innermost is a skull.</summary>
    /// <param name="head">The head.</param>
    public static double? Of(LayeredSphere head)
    {
        double thickness = 0, resistance = 0;
        for (int k = 1; k < head.Layers.Count; k++)
        {
            if (IsSkull(head.Layers[k]))
            {
                double t = head.Layers[k].OuterRadius - head.Layers[k - 1].OuterRadius;
                thickness += t;
                resistance += t / head.Layers[k].RadialConductivity;
            }
        }

        return thickness > 0 ? head.Layers[0].RadialConductivity * resistance / thickness : null;
    }

    /// <summary>The same head with another ratio.</summary>
    /// <param name="head">A head with a skull.</param>
    /// <param name="ratio">Ratio, positive, without unit.</param>
    /// <exception cref="ArgumentException">No layer is a skull.</exception>
    public static LayeredSphere With(LayeredSphere head, double ratio)
    {
        double factor = (Of(head) ?? throw new ArgumentException("No layer of this head is a skull.", nameof(head))) / ratio;
        return new LayeredSphere(head.Name, head.Centre, [.. head.Layers.Select((layer, k) => k == 0 || !IsSkull(layer) ? layer
            : layer with { RadialConductivity = layer.RadialConductivity * factor, TangentialConductivity = layer.TangentialConductivity * factor })]);
    }

    private static bool IsSkull(SphereLayer layer) => layer.Tissue.Contains("skull", StringComparison.OrdinalIgnoreCase);
}
