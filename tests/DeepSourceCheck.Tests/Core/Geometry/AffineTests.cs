using CsCheck;

using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Tests.Core.Geometry;

public sealed class AffineTests
{
    /// <summary>Rounding of a few products of numbers up to 500, over voxels of at least half a unit.</summary>
    private const double Rounding = 1e-9;

    private static readonly Gen<Vec3> Vector = Gen.Select(Gen.Double[-100, 100], Gen.Double[-100, 100], Gen.Double[-100, 100], (x, y, z) => new Vec3(x, y, z));

    [Fact]
    public void Inverse_UndoesTheMap() =>
        Gen.Select(Vector, Gen.Select(Gen.Double[0.5, 5], Gen.Double[0.5, 5], Gen.Double[0.5, 5]), Gen.Double[-0.3, 0.3], Vector, Vector).Sample((angles, size, shear, t, p) =>
        {
            // Voxels of 0.5 to 5 units, turned and sheared, as volumes have them.
            Rotation r = Rotation.FromFixedAxes(angles.X, angles.Y, angles.Z);
            Affine affine = new(Scaled(r.Row0, size, shear), Scaled(r.Row1, size, shear), Scaled(r.Row2, size, shear), t);
            return (affine.Inverse().Apply(affine.Apply(p)) - p).Norm < Rounding && (affine.Apply(affine.Inverse().Apply(p)) - p).Norm < Rounding;
        });

    [Fact]
    public void FromQuaternion_TurnsLengthsIntoOrthogonalAxes() =>
        Gen.Select(Vector.Where(v => v.Norm > 1), Gen.Double[0, 1], Gen.Bool).Sample((axis, sine, mirrored) =>
        {
            Vec3 q = sine * axis.Unit();
            Affine affine = Affine.FromQuaternion(q.X, q.Y, q.Z, new(1, 2, 3), new(2, 3, 5), mirrored ? -1 : 1);
            return Math.Abs(affine.Column(0).Norm - 2) < Rounding && Math.Abs(affine.Column(1).Norm - 3) < Rounding && Math.Abs(affine.Column(2).Norm - 5) < Rounding
                && Math.Abs(Vec3.Dot(affine.Column(0), affine.Column(1))) < Rounding && Math.Abs(Vec3.Dot(affine.Column(1), affine.Column(2))) < Rounding
                && Math.Abs(affine.Determinant - (mirrored ? -30 : 30)) < 30 * Rounding && affine.Apply(Vec3.Zero) == new Vec3(1, 2, 3);
        });

    // A quarter turn about z: a = d = cos 45 degrees. By hand: x goes to y, y to -x.
    [Fact]
    public void FromQuaternion_OfQuarterTurnAboutZ_SendsXToY()
    {
        Affine affine = Affine.FromQuaternion(0, 0, Math.Sqrt(0.5), Vec3.Zero, new(1, 1, 1), 1);
        Assert.True((affine.Apply(new(1, 0, 0)) - new Vec3(0, 1, 0)).Norm < Rounding);
        Assert.True((affine.Apply(new(0, 1, 0)) - new Vec3(-1, 0, 0)).Norm < Rounding);
    }

    [Fact]
    public void SingularMaps_AreNotInvertible()
    {
        Assert.False(default(Affine).IsInvertible);
        Assert.False(new Affine(new(1, 0, 1), new(0, 1, 1), new(0, 0, 0), Vec3.Zero).IsInvertible);
        Assert.False((Affine.Identity with { Row1 = new(0, double.NaN, 0) }).IsInvertible);
        Assert.Throws<InvalidOperationException>(() => default(Affine).Inverse());
    }

    private static Vec3 Scaled(Vec3 row, (double X, double Y, double Z) size, double shear) => new(row.X * size.X, row.Y * size.Y + shear * row.X, row.Z * size.Z);
}
