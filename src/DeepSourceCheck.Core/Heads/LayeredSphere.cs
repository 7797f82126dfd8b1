using System.Globalization;
using System.Runtime.CompilerServices;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Heads;

/// <summary>Concentric spherical layers, innermost first; sources stand in the innermost.</summary>
public sealed class LayeredSphere : IHead
{
    /// <summary>The share of the inner radius up to which a dipole is kept.</summary>
    public const double LargestEccentricity = 0.995;

    /// <summary>Distance from the centre [m] within which the split of directions is undefined.</summary>
    public const double CentreTolerance = 1e-6;

    /// <summary>Depth of the cortex below the inner skull [m].</summary>
    public const double CortexDepth = 0.006;

    public LayeredSphere(string name, Vec3 centre, IReadOnlyList<SphereLayer> layers)
    {
        if (layers.Count == 0)
        {
            throw new ArgumentException("A sphere needs at least one layer.", nameof(layers));
        }

        Name = name;
        Centre = centre;
        Layers = layers;
    }

    /// <inheritdoc/>
    public string Name { get; }

    /// <summary>Centre [m], in the frame of the regions.</summary>
    public Vec3 Centre { get; }

    /// <summary>Layers, innermost first.</summary>
    public IReadOnlyList<SphereLayer> Layers { get; }

    /// <summary>Radius of the innermost layer [m].</summary>
    public double InnerRadius => Layers[0].OuterRadius;

    /// <summary>Radius of the scalp [m].</summary>
    public double OuterRadius => Layers[^1].OuterRadius;

    /// <summary>Radius of the skull's inner surface [m]; of the innermost layer where no layer is named skull.</summary>
    public double InnerSkullRadius
    {
        get
        {
            for (int k = 1; k < Layers.Count; k++)
            {
                if (Layers[k].Tissue.Contains("skull", StringComparison.OrdinalIgnoreCase))
                {
                    return Layers[k - 1].OuterRadius;
                }
            }

            return InnerRadius;
        }
    }

    /// <inheritdoc/>
    public string? WhyRefused(Vec3 point)
    {
        double r = (point - Centre).Norm;
        if (r <= CentreTolerance && Layers[0].RadialConductivity != Layers[0].TangentialConductivity)
        {
            return "at the sphere's centre, where an innermost layer that conducts differently along and across the radius defines no potential";
        }

        double limit = LargestEccentricity * InnerRadius;
        return r <= limit * (1 + 1e-12)
            ? null
            : string.Create(CultureInfo.InvariantCulture,
                $"{Si.ToMm(r):0.0} mm from the sphere's centre, {Si.ToMm(r - limit):0.0} mm beyond the {Si.ToMm(limit):0.0} mm that the innermost layer admits");
    }

    /// <summary>Radius of the shell that stands for the cortex [m].</summary>
    public double CortexRadius => InnerSkullRadius - CortexDepth;

    /// <inheritdoc/>
    public string? TissueAt(Vec3 point)
    {
        double r = (point - Centre).Norm;
        return Layers.FirstOrDefault(layer => r <= layer.OuterRadius)?.Tissue ?? "outside";
    }

    /// <inheritdoc/>
    /// <remarks>Asked once a dipole: optimised from the first call on.</remarks>
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    public Vec3? Outward(Vec3 point)
    {
        Vec3 offset = point - Centre;
        double distance = offset.Norm;
        return distance <= CentreTolerance ? null : offset / distance;
    }

    /// <inheritdoc/>
    public bool IsSymmetryCentre(Vec3 point) => (point - Centre).Norm <= CentreTolerance;

    /// <inheritdoc/>
    public double? Radius => OuterRadius;

    /// <inheritdoc/>
    public double? Depth(Vec3 point) => OuterRadius - (point - Centre).Norm;

    /// <inheritdoc/>
    public double? DepthBelowInnerSkull(Vec3 point) => InnerSkullRadius - (point - Centre).Norm is >= 0 and double depth ? depth : null;

    /// <inheritdoc/>
    /// <remarks>On the shell of the cortex; where the fluid is thicker than that, on the outermost sphere that admits sources.</remarks>
    public IReadOnlyList<Vec3> BackgroundPlaces(int count)
    {
        double radius = Math.Min(CortexRadius, LargestEccentricity * InnerRadius);
        return [.. Enumerable.Range(0, count).Select(k => Centre + radius * GoldenSpiral.Point(k, count))];
    }
}
