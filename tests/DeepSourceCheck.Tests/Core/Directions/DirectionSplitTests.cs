using System.Text.Json;

using DeepSourceCheck.Core.Directions;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Tests.Core.Leadfields;
using DeepSourceCheck.Tests.References;
using DeepSourceCheck.Tests.Support;

using MathNet.Numerics.LinearAlgebra;

namespace DeepSourceCheck.Tests.Core.Directions;

/// <summary>The split of directions: reference case 08, traps 1 to 5 and the conventions of the contract.</summary>
public class DirectionSplitTests
{
    private static readonly ImportedHead NoHead = new();

    private sealed record Case08(string Array, Func<LayeredSphere, Vec3[], double[][]> Leadfields, string Values);

    private static JsonElement Reference { get; } = ReferenceCase.Sphere("08");

    private static JsonElement Inputs => Reference.GetProperty("inputs");

    private static Vec3[] Positions => Inputs.GetProperty("dipole_position_m").Points();

    private static LayeredSphere HeadAt(Vec3 centre)
    {
        JsonElement eeg = Inputs.GetProperty("eeg_three_layers");
        return SphereLeadfields.Isotropic(centre,
            [.. eeg.GetProperty("radii_m_innermost_first").Numbers().Zip(eeg.GetProperty("conductivity_S_per_m_innermost_first").Numbers())]);
    }

    private static LayeredSphere Head
    {
        get
        {
            double[] c = Inputs.GetProperty("sphere_centre_m").Numbers();
            return HeadAt(new(c[0], c[1], c[2]));
        }
    }

    private static MegChannel[] Magnetometers => SphereLeadfields.Channels(Inputs.GetProperty("magnetometers"), CoilKind.Magnetometer);

    private static Case08[] Arrays { get; } =
    [
        new("magnetometers", (head, p) => SphereLeadfields.Meg(head, p, Magnetometers), "singular_values_T_per_A_m"),
        new("axial_gradiometers",
            (head, p) => SphereLeadfields.Meg(head, p, SphereLeadfields.Channels(Inputs.GetProperty("axial_gradiometers"), CoilKind.AxialGradiometer)),
            "singular_values_T_per_A_m"),
        new("eeg_three_layers_average_reference",
            (head, p) => [.. SphereLeadfields.Eeg(head, p, SphereLeadfields.Electrodes(Inputs.GetProperty("eeg_three_layers").GetProperty("electrode_position_m").Points()))
                .Select(SphereLeadfields.AverageReferenced)],
            "singular_values_V_per_A_m"),
    ];

    [Fact]
    public void Split_OfDeepPositions_MeetsReferenceCase08()
    {
        // Independent calculator: leadfield at 40 digits, Gram eigenproblem at 90; provenance in the file. The head is left out here so that
        // positions within a micrometre of the centre are split too: the mathematics holds there, the study's convention does not.
        double allowed = Reference.GetProperty("tolerance").GetProperty("singular_values").GetProperty("limit").GetDouble();
        foreach (Case08 array in Arrays)
        {
            double[][] leadfields = array.Leadfields(Head, Positions);
            List<(SplitBlock Block, int Lane)> splits = Splits.Of(leadfields, Positions, NoHead);
            for (int d = 0; d < splits.Count; d++)
            {
                JsonElement expected = Reference.GetProperty("expected").GetProperty("positions")[d].GetProperty(array.Array);
                double[] values = expected.GetProperty(array.Values).Numbers();
                (SplitBlock split, int lane) = splits[d];
                RelativeAssert.Close(values, [split.S(0, lane), split.S(1, lane), split.S(2, lane)], allowed, $"{array.Array}, position {d},");
                for (int k = 0; k < 3; k++)
                {
                    if (expected.GetProperty("direction_determined")[k].GetBoolean())
                    {
                        double[] v = expected.GetProperty("directions")[k].Numbers();
                        double limit = Math.Max(1e-9, expected.GetProperty("direction_tolerance_rad")[k].GetDouble());
                        Assert.InRange(PlainSingularValues.Angle(new(v[0], v[1], v[2]), split.V(k, lane)), 0, limit);
                    }
                    else
                    {
                        Assert.Equal(SplitState.Undefined, split.States[lane]);
                        Assert.True(double.IsNaN(split.V(k, lane).X));
                    }
                }

                bool meg = array.Values.Contains("_T_", StringComparison.Ordinal);
                Assert.Equal(meg, split.IsSilent(2, lane));
            }
        }
    }

    [Fact]
    public void Split_WithinAMicrometreOfTheCentre_IsUndefined()
    {
        List<(SplitBlock Block, int Lane)> splits = Splits.Of(Arrays[0].Leadfields(Head, Positions), Positions, Head);
        SplitState[] states = [.. splits.Select(s => s.Block.States[s.Lane])];
        // The sixth position is 1.005 um off the centre, the seventh 1 nm.
        Assert.Equal([SplitState.Ok, SplitState.Ok, SplitState.Ok, SplitState.Ok, SplitState.Ok, SplitState.Ok, SplitState.Undefined, SplitState.Undefined], states);
        Assert.All(splits[6..], s => Assert.True(double.IsNaN(s.Block.V(2, s.Lane).Z)));
    }

    [Fact]
    public void SilentDirection_IsExactlyZero_WhereTheGramMatrixWouldKeepNoise()
    {
        // Trap 1: eigenvalues of L'L know the third singular value only to the square root of rounding.
        double[] leadfield = Arrays[0].Leadfields(Head, Positions)[0];
        SplitBlock split = Splits.Of(leadfield, Positions[0], Head);
        Assert.Equal(0.0, split.S(2, 0));
        Assert.True(split.IsSilent(2, 0));
        Assert.False(split.IsSilent(1, 0));
        Matrix<double> l = Matrix<double>.Build.DenseOfRowMajor(leadfield.Length / 3, 3, leadfield);
        double fromGram = Math.Sqrt(Math.Abs((l.Transpose() * l).Evd(Symmetricity.Symmetric).EigenValues.Min(e => e.Real)));
        Assert.True(fromGram > 1e-11 * split.S(0, 0), $"{fromGram / split.S(0, 0)}");
    }

    [Fact]
    public void SmallestSingularValue_FarBelowTheSquareRootOfRounding_IsKept()
    {
        // Trap 1 in numbers: s3 = 1e-12 s1 lies below the 1e-8 s1 that L'L resolves, above what is called silent (40 eps).
        const int rows = 40;
        Vec3[] axes = [new(0.6, 0.64, 0.48), new(-0.8, 0.48, 0.36), new(0, -0.6, 0.8)];
        Matrix<double> u = Matrix<double>.Build.Dense(rows, 3, (r, c) => Math.Cos(Math.PI * (r + 0.5) * (c + 1) / rows) * Math.Sqrt(2.0 / rows));
        double[] s = [3e5, 2e5, 3e-7];
        double[] matrix = [.. Enumerable.Range(0, rows * 3).Select(i => Enumerable.Range(0, 3).Sum(k => s[k] * u[i / 3, k] * axes[k][i % 3]))];
        SplitBlock split = Splits.Of(matrix, Vec3.Zero, NoHead);
        // Rounding of the matrix itself moves s3 by some eps s1.
        Assert.InRange(split.S(2, 0), 3e-7 - 1e-10, 3e-7 + 1e-10);
        Assert.InRange(PlainSingularValues.Angle(split.V(2, 0), axes[2]), 0, 1e-14);
    }

    [Fact]
    public void SilenceThreshold_IsRowsTimesEpsilon()
    {
        double[] Matrix(double third) => [1, 0, 0, 0, 0.5, 0, 0, 0, third, .. new double[3 * 17]];
        const double threshold = 20 * 2.220446049250313e-16;
        Assert.False(Splits.Of(Matrix(1.01 * threshold), Vec3.Zero, NoHead).IsSilent(2, 0));
        Assert.True(Splits.Of(Matrix(0.99 * threshold), Vec3.Zero, NoHead).IsSilent(2, 0));
    }

    [Fact]
    public void SecondSingularValue_NearTheCentre_LooksHealthyWhileAllFallLinearly()
    {
        // Trap 3: s2/s1 stays near 0.9 down to the centre; the values themselves fall with the distance.
        List<(SplitBlock Block, int Lane)> splits = Splits.Of(Arrays[0].Leadfields(Head, Positions), Positions, NoHead);
        (SplitBlock micro, int m) = splits[5];
        (SplitBlock nano, int n) = splits[6];
        RelativeAssert.Equal(1000, micro.S(0, m) / nano.S(0, n), 1e-5); // distance over sensor radius
        Assert.InRange(micro.S(1, m) / micro.S(0, m), 0.85, 0.95);
        Assert.InRange(nano.S(1, n) / nano.S(0, n), 0.85, 0.95);
    }

    [Fact]
    public void SecondSingularValue_UnderShiftsOfTheCentre_MovesAsInReferenceCase08()
    {
        // Trap 4: a 5 mm shift along the axes changes a deep MEG result far more than any rounding; the case's own diagnostics at 40 digits.
        JsonElement diagnostics = Reference.GetProperty("diagnostics_not_to_check").GetProperty("sensitivity_to_centre_5_mm_shift_along_axes");
        Vec3[] shifts = [new(5e-3, 0, 0), new(-5e-3, 0, 0), new(0, 5e-3, 0), new(0, -5e-3, 0), new(0, 0, 5e-3), new(0, 0, -5e-3)];
        string[] labels = [.. Inputs.GetProperty("label").EnumerateArray().Select(l => l.GetString()!)];
        double SecondAt(Vec3 centre, int d) => Splits.Of(Arrays[0].Leadfields(HeadAt(centre), [Positions[d]])[0], Positions[d], NoHead).S(1, 0);
        for (int d = 0; d < 5; d++)
        {
            double[] ratios = [.. shifts.Select(shift => SecondAt(Head.Centre + shift, d) / SecondAt(Head.Centre, d))];
            JsonElement expected = diagnostics.GetProperty(labels[d]);
            RelativeAssert.Equal(expected.GetProperty("second_singular_value_ratio_min").GetDouble(), ratios.Min(), 1e-10, labels[d]);
            RelativeAssert.Equal(expected.GetProperty("second_singular_value_ratio_max").GetDouble(), ratios.Max(), 1e-10, labels[d]);
        }
    }

    [Theory]
    [InlineData(2.0, 1.0, 0.5, SplitState.Ok)]
    [InlineData(1.0, 1.0, 0.5, SplitState.Degenerate)]
    [InlineData(1.0, 1.0 - 0.9e-8, 0.5, SplitState.Degenerate)]
    [InlineData(1.0, 1.0 - 1.1e-8, 0.5, SplitState.Ok)]
    [InlineData(1.0, 0.5, 0.5 - 0.9e-8, SplitState.Degenerate)]
    [InlineData(1.0, 0.5, 0.5 - 1.1e-8, SplitState.Ok)]
    [InlineData(1.0, 0.0, 0.0, SplitState.Degenerate)]
    [InlineData(0.0, 0.0, 0.0, SplitState.Undefined)]
    public void State_FollowsTheGapsBetweenSingularValues(double s1, double s2, double s3, SplitState expected)
    {
        // Trap 5: the contract's gap is 1e-8 of the largest.
        double[] matrix = [0, s2, 0, s1, 0, 0, 0, 0, s3];
        Assert.Equal(expected, Splits.Of(matrix, new(0, 0, 0.03), NoHead).States[0]);
    }

    [Fact]
    public void Signs_FollowTheContract()
    {
        Vec3[] positions = Positions[..5];
        foreach (Case08 array in Arrays)
        {
            foreach ((SplitBlock split, int lane) in Splits.Of(array.Leadfields(Head, positions), positions, Head))
            {
                Vec3 v1 = split.V(0, lane), v2 = split.V(1, lane), v3 = split.V(2, lane);
                double[] components = [v1.X, v1.Y, v1.Z];
                Assert.Equal(components.Max(Math.Abs), components.Max());
                Assert.True(Vec3.Dot(v3, positions[lane] - Head.Centre) > 0);
                RelativeAssert.Close(new[] { Vec3.Cross(v3, v1) }.Flat(), new[] { v2 }.Flat(), 1e-15);
            }
        }
    }

    [Fact]
    public void Signs_WithoutAnOutside_MakeTheLargestComponentPositive()
    {
        SplitBlock split = Splits.Of([3, 0, 0, 0, 2, 0, 0, 0, -1, 0, 0, 0], new(0, 0, -0.03), NoHead);
        Assert.Equal([new(1, 0, 0), new(0, 1, 0), new(0, 0, 1)], new[] { split.V(0, 0), split.V(1, 0), split.V(2, 0) });
    }

    [Fact]
    public void WeakestDirection_OfEeg_IsNotTheRadius()
    {
        // Trap 5: 0.5 to 1.2 rad away, as reference case 08 lists.
        List<(SplitBlock Block, int Lane)> splits = Splits.Of(Arrays[2].Leadfields(Head, Positions), Positions, NoHead);
        for (int d = 0; d < 5; d++)
        {
            double angle = PlainSingularValues.Angle(splits[d].Block.V(2, splits[d].Lane), (Positions[d] - Head.Centre).Unit());
            double expected = Reference.GetProperty("expected").GetProperty("positions")[d].GetProperty("eeg_three_layers_average_reference")
                .GetProperty("quasi_radial_angle_to_radius_rad").GetDouble();
            Assert.InRange(Math.Abs(angle - expected), 0, 1e-9);
        }
    }

    [Theory]
    [InlineData(0)]
    [InlineData(1)]
    [InlineData(2)]
    public void Split_OfFewerRowsThanAxes_HasTheirRank(int rows)
    {
        double[] matrix = [.. new double[] { 1, 2, 2, 0, 3, -3 }.Take(3 * rows)];
        SplitBlock split = Splits.Of(matrix, new(0, 0, 0.03), NoHead);
        Assert.Equal(rows, Enumerable.Range(0, 3).Count(k => !split.IsSilent(k, 0)));
        Assert.Equal(rows switch { 0 => SplitState.Undefined, 1 => SplitState.Degenerate, _ => SplitState.Ok }, split.States[0]);
    }
}
