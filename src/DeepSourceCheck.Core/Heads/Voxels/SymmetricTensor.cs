using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Heads.Voxels;

/// <summary>A symmetric 3 x 3 conductivity tensor in world axes [S/m].</summary>
/// <param name="Xx">Entry x x [S/m].</param>
/// <param name="Xy">Entry x y [S/m].</param>
/// <param name="Yy">Entry y y [S/m].</param>
/// <param name="Xz">Entry x z [S/m].</param>
/// <param name="Yz">Entry y z [S/m].</param>
/// <param name="Zz">Entry z z [S/m].</param>
public readonly record struct SymmetricTensor(double Xx, double Xy, double Yy, double Xz, double Yz, double Zz)
{
    /// <summary>The tensor of an isotropic conductor.</summary>
    /// <param name="conductivity">Conductivity [S/m].</param>
    public static SymmetricTensor Isotropic(double conductivity) => new(conductivity, 0, conductivity, 0, 0, conductivity);

    /// <summary>A third of the trace: the mean conductivity over directions [S/m].</summary>
    public double Mean => (Xx + Yy + Zz) / 3;

    /// <summary>True when every entry is finite.</summary>
    public bool IsFinite => double.IsFinite(Xx + Xy + Yy + Xz + Yz + Zz);

    /// <summary>True when every entry is zero.</summary>
    public bool IsZero => this == default;

    /// <summary>True when the current never runs against the field: the leading minors are positive (Sylvester's criterion), the largest relative to the trace.</summary>
    /// <remarks>The determinant must exceed 1e-9 of the mean cubed: below it, the tensor insulates along an axis within the precision of a file.</remarks>
    public bool IsPositiveDefinite
    {
        get
        {
            double minor = Xx * Yy - Xy * Xy;
            double determinant = Xx * (Yy * Zz - Yz * Yz) - Xy * (Xy * Zz - Yz * Xz) + Xz * (Xy * Yz - Yy * Xz);
            return Xx > 0 && minor > 0 && determinant > 1e-9 * Mean * Mean * Mean;
        }
    }

    /// <summary>The current density [A/m^2] that a field [V/m] drives.</summary>
    public Vec3 Apply(Vec3 field) => new(
        Xx * field.X + Xy * field.Y + Xz * field.Z,
        Xy * field.X + Yy * field.Y + Yz * field.Z,
        Xz * field.X + Yz * field.Y + Zz * field.Z);
}
