using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Studies;

using static System.FormattableString;

namespace DeepSourceCheck.Files.Nifti;

/// <summary>Decides where a volume lies: the sform if its code is above 0, else the qform if its code is above 0, else the voxel sizes alone.</summary>
internal static class NiftiPlacement
{
    /// <summary>Distance [mm] between sform and qform at a corner of the volume from which the disagreement is said.</summary>
    private const double Disagreement = 0.1;

    /// <summary>Relative difference between pixdim and the sform's voxel sizes from which it is said.</summary>
    private const double SizeDisagreement = 0.01;

    /// <summary>b^2 + c^2 + d^2 above this is no rotation but a damaged header; single precision explains 1e-6.</summary>
    private const double LargestQuaternion = 1.0001;

    /// <summary>Edge lengths [mm] outside which a voxel is not of a head: the unit is likely wrong.</summary>
    private static readonly (double Low, double High) UsualVoxel = (0.01, 50);

    /// <summary>The map from voxels to metres.</summary>
    /// <exception cref="InputException">The chosen orientation is not finite or not invertible.</exception>
    public static (Affine ToWorld, NiftiOrientation Orientation) Find(NiftiFields fields, int[] dims, string displayName, List<string> warnings)
    {
        double unit = Unit(fields.Units, displayName, warnings);
        (Affine affine, NiftiOrientation orientation) =
            fields.SformCode > 0 ? (FromSform(fields, displayName), NiftiOrientation.Sform)
            : fields.QformCode > 0 ? (FromQform(fields, displayName), NiftiOrientation.Qform)
            : (FromSizes(fields, displayName), NiftiOrientation.VoxelSizesOnly);
        if (!(affine.ThenScale(unit) is { IsInvertible: true } inMetres && double.IsNormal(inMetres.Determinant)))
        {
            throw new InputException(displayName, orientation == NiftiOrientation.Sform ? "srow" : "pixdim",
                "the map from voxels to millimetres is singular: its axes vanish or lie in one plane; give the file a valid orientation");
        }

        switch (orientation)
        {
            case NiftiOrientation.Sform:
                WarnOfDisagreement(fields, affine, unit, dims, displayName, warnings);
                break;
            case NiftiOrientation.VoxelSizesOnly:
                warnings.Add($"{displayName} states no orientation (sform_code and qform_code are 0): only voxel sizes are known; places are given as if voxel (0, 0, 0) lay at the origin and the axes ran right, front, up");
                break;
            default:
                break;
        }

        for (int axis = 0; axis < 3; axis++)
        {
            double edge = inMetres.Column(axis).Norm * 1000;
            if (edge < UsualVoxel.Low || edge > UsualVoxel.High)
            {
                warnings.Add(Invariant($"{displayName} has voxels of {edge:G4} mm along axis {axis + 1}: check the unit in xyzt_units"));
            }
        }

        return (inMetres, orientation);
    }

    /// <summary>Metres per unit of the header.</summary>
    private static double Unit(int code, string displayName, List<string> warnings)
    {
        switch (code & 7)
        {
            case 1:
                return 1.0;
            case 0 or 2:
                return 1e-3;
            case 3:
                return 1e-6;
            default:
                warnings.Add($"{displayName}: xyzt_units has the space code {code & 7}, which the standard does not define; millimetres are assumed");
                return 1e-3;
        }
    }

    private static Affine FromSform(NiftiFields fields, string displayName) =>
        fields.Sform.IsFinite ? fields.Sform : throw new InputException(displayName, "srow", "the sform holds a value that is not finite; give the file a valid orientation");

    private static Affine FromQform(NiftiFields fields, string displayName)
    {
        if (!(Vec3.Dot(fields.Quaternion, fields.Quaternion) <= LargestQuaternion) || !fields.QuaternionOffset.IsFinite)
        {
            throw new InputException(displayName, "quatern", Invariant(
                $"the qform's quaternion ({fields.Quaternion.X:G6}, {fields.Quaternion.Y:G6}, {fields.Quaternion.Z:G6}) and offsets are not those of a rotation and a shift; give the file a valid orientation"));
        }

        return Affine.FromQuaternion(fields.Quaternion.X, fields.Quaternion.Y, fields.Quaternion.Z, fields.QuaternionOffset, Sizes(fields, displayName), fields.Pixdim[0]);
    }

    private static Affine FromSizes(NiftiFields fields, string displayName)
    {
        Vec3 s = Sizes(fields, displayName);
        return new(new(s.X, 0, 0), new(0, s.Y, 0), new(0, 0, s.Z), Vec3.Zero);
    }

    private static Vec3 Sizes(NiftiFields fields, string displayName)
    {
        for (int axis = 1; axis <= 3; axis++)
        {
            if (!(fields.Pixdim[axis] > 0 && double.IsFinite(fields.Pixdim[axis])))
            {
                throw new InputException(displayName, $"pixdim[{axis}]",
                    Invariant($"the voxel size is {fields.Pixdim[axis]:G6}; without an sform it must be positive and finite"));
            }
        }

        return new(fields.Pixdim[1], fields.Pixdim[2], fields.Pixdim[3]);
    }

    private static void WarnOfDisagreement(NiftiFields fields, Affine sform, double unit, int[] dims, string displayName, List<string> warnings)
    {
        for (int axis = 0; axis < 3; axis++)
        {
            double size = sform.Column(axis).Norm, stated = fields.Pixdim[axis + 1];
            if (!(Math.Abs(size - stated) <= SizeDisagreement * size))
            {
                warnings.Add(Invariant($"{displayName}: pixdim[{axis + 1}] is {stated:G6} but the sform's voxels measure {size:G6}; the sform is used"));
                return;
            }
        }

        if (fields.QformCode <= 0 || !(Vec3.Dot(fields.Quaternion, fields.Quaternion) <= LargestQuaternion) || !fields.QuaternionOffset.IsFinite)
        {
            return;
        }

        Affine qform = FromQform(fields, displayName);
        double worst = 0;
        for (int corner = 0; corner < 8; corner++)
        {
            Vec3 v = new((corner & 1) * (dims[0] - 1.0), (corner >> 1 & 1) * (dims[1] - 1.0), (corner >> 2) * (dims[2] - 1.0));
            worst = Math.Max(worst, (sform.Apply(v) - qform.Apply(v)).Norm * unit * 1000);
        }

        if (worst > Disagreement)
        {
            warnings.Add(Invariant($"{displayName}: sform and qform disagree by up to {worst:F1} mm; the sform is used"));
        }
    }
}
