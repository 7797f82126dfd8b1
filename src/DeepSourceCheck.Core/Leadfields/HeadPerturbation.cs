using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Leadfields;

/// <summary>What may differ from the nominal head and array while sources, noise and sensors' names stay.</summary>
public sealed record HeadPerturbation
{
    /// <summary>Innermost conductivity over the skull's, without unit; null: as nominal.</summary>
    public double? SkullRatio { get; init; }

    /// <summary>How far the head stands from its nominal place in the MEG array [m].</summary>
    public Vec3 HeadShift { get; init; }

    /// <summary>How far the sphere's centre lies from its nominal place [m]; electrodes move along, sources and coils stay.</summary>
    public Vec3 CentreShift { get; init; }

    /// <summary>Distance of a generated array from the scalp [m]; null: as nominal.</summary>
    public double? Gap { get; init; }
}

/// <summary>A head that can be perturbed.</summary>
public interface IPerturbableHead
{
    /// <summary>The ratio of the nominal head, without unit; null where it cannot be varied.</summary>
    double? SkullRatio { get; }

    /// <summary>Distance of the generated array from the scalp [m]; null where there is none.</summary>
    double? Gap { get; }

    /// <summary>Leadfields of the perturbed head, rows as nominal.</summary>
    /// <param name="perturbation">What differs.</param>
    ILeadfieldSource Perturbed(HeadPerturbation perturbation);
}
