using System.Text.Json;

using DeepSourceCheck.Core.Attribution;
using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Spheres;
using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Tests.Core.Leadfields;
using DeepSourceCheck.Tests.Support;

using MathNet.Numerics.LinearAlgebra;

namespace DeepSourceCheck.Tests.Core.Attribution;

/// <summary>Location bounds: reference case 14 [Mosher et al. 1993], traps 12 and 1.</summary>
public class LocationBoundTests
{
    // Case 14 states 1e-8 for analytic derivatives and these for central differences.
    private const double DerivativeLimit = 1e-6, CovarianceLimit = 1e-5;

    // Both ways of projecting the moment out are exact; what differs is rounding times the condition of the scaled Fisher matrix, some 1e5 (trap 12).
    private const double TwinLimit = 1e-9;

    private static JsonElement Reference { get; } = ReferenceCase.Sphere("14");

    private static JsonElement Inputs => Reference.GetProperty("inputs");

    private static JsonElement Expected => Reference.GetProperty("expected");

    private static LayeredSphere Head
    {
        get
        {
            double[] c = Inputs.GetProperty("sphere_centre_m").Numbers();
            return SphereLeadfields.Isotropic(new(c[0], c[1], c[2]),
                [.. Inputs.GetProperty("radii_m_innermost_first").Numbers().Zip(Inputs.GetProperty("conductivity_S_per_m_innermost_first").Numbers())]);
        }
    }

    public static TheoryData<int> Rows => [.. Enumerable.Range(0, Expected.GetProperty("rows").GetArrayLength())];

    [Theory]
    [MemberData(nameof(Rows))]
    public void Bound_MeetsReferenceCase14(int row)
    {
        JsonElement input = Inputs.GetProperty("rows")[row], expected = Expected.GetProperty("rows")[row];
        double[] p = input.GetProperty("dipole_position_m").Numbers(), q = input.GetProperty("dipole_moment_A_m").Numbers();
        string noise = input.GetProperty("modality_and_noise").GetString()!;
        double samples = input.GetProperty("n_samples").GetDouble();
        LocationBound bound = Bound(new(p[0], p[1], p[2]), noise);
        Vec3 moment = new(q[0], q[1], q[2]);
        Assert.Equal(expected.GetProperty("moment_rank").GetInt32(), bound.MomentRankFound);
        if (expected.GetProperty("unbounded").GetBoolean())
        {
            // Either is allowed: no bound at all, or what differences leave, far beyond the head.
            Assert.True(bound.Error(moment) > Head.OuterRadius);
            return;
        }

        double[] covariance = [.. bound.Covariance(moment)!.Select(c => c / samples)];
        RelativeAssert.Close(expected.GetProperty("location_covariance_m2").Flat(), covariance, CovarianceLimit, "location covariance");
        double error = bound.Error(moment) / Math.Sqrt(samples);
        RelativeAssert.Close([expected.GetProperty("location_error_bound_mm").GetDouble()], [1e3 * error], CovarianceLimit, "bound");
        Assert.Equal(expected.GetProperty("exceeds_head_radius").GetBoolean(), error > Head.OuterRadius);
    }

    [Fact]
    public void Derivatives_MeetReferenceCase14()
    {
        double[] p = Inputs.GetProperty("rows")[0].GetProperty("dipole_position_m").Numbers();
        var place = new PositionDerivative(Source, Head);
        Assert.True(place.Fill(new(p[0], p[1], p[2])));
        Compare(place, place.Block.Eeg, "eeg_leadfield_position_derivative_first_row_position_V_per_A_m2", meanFree: true);
        Compare(place, place.Block.Meg, "meg_leadfield_position_derivative_first_row_position_T_per_A_m2", meanFree: false);
    }

    [Theory]
    [InlineData("eeg_corr")]
    [InlineData("both_corr")]
    [InlineData("eeg_white")]
    public void Covariance_EqualsThatOfTheScaledFisherMatrix(string noise)
    {
        // Plain twin: the whole 6 x 6 Fisher matrix in mm and units of the moment, inverted.
        var moment = new Vec3(4e-9, 7e-9, -5e-9);
        (double[] l, double[] d) = Whitened(new(0.02, -0.03, 0.07), noise);
        int rows = l.Length / 3;
        double unit = moment.Norm;
        Matrix<double> j = Matrix<double>.Build.Dense(rows, 6, (row, c) => c < 3
            ? 1e-3 * (d[9 * row + c] * moment.X + d[9 * row + 3 + c] * moment.Y + d[9 * row + 6 + c] * moment.Z)
            : unit * l[3 * row + c - 3]);
        Matrix<double> covariance = (j.Transpose() * j).Inverse();
        double[] plain = [.. Enumerable.Range(0, 9).Select(k => 1e-6 * covariance[k / 3, k % 3])];
        RelativeAssert.Close(plain, new LocationBound(l, d).Covariance(moment)!, TwinLimit, "covariance");
    }

    [Fact]
    public void Error_FallsWithTheMoment_AndNotWithItsSilentPart()
    {
        var place = new Vec3(0.0135, -0.026, 0.0114);
        Vec3 outward = (place - Head.Centre).Unit(), tangential = Vec3.Cross(outward, new(1, 0, 0)).Unit();
        LocationBound meg = Bound(place, "meg_white");
        double once = meg.Error(1e-8 * tangential);
        RelativeAssert.Close([once / 2], [meg.Error(2e-8 * tangential)], TwinLimit, "half");
        // Rank 2: a radial part adds no field, and its derivative lies in the range of the moments (row 4 of the case).
        RelativeAssert.Close([once], [meg.Error(1e-8 * tangential + 3e-8 * outward)], CovarianceLimit, "radial part");
    }

    [Fact]
    public void SourceWithoutPlacesBetweenItsPoints_HasNoDerivative() =>
        Assert.Throws<ArgumentException>(() => new PositionDerivative(new FixedSource([[[1.0, 2, 3]]], []), new ImportedHead()));

    [Fact]
    public void Derivative_AtTheBorder_IsOneSided()
    {
        // 1 um below the last admitted place the step up is refused; a one-sided difference is of first order in the step.
        LayeredSphere head = Head;
        Vec3 up = new(0, 0, 1), border = head.Centre + LayeredSphere.LargestEccentricity * head.InnerRadius * up, inside = border - 1e-6 * up;
        Assert.NotNull(head.WhyRefused(inside + 1e-5 * up));
        var place = new PositionDerivative(Source, head);
        double[] Derivative(Vec3 at)
        {
            Assert.True(place.Fill(at));
            var l = new double[3 * 60];
            var d = new double[9 * 60];
            place.Read(place.Block.Meg, l, d);
            return d;
        }

        const double FirstOrder = 1e-3;
        RelativeAssert.Close(Derivative(border - 1.2e-5 * up), Derivative(inside), FirstOrder, "one-sided");
    }

    private static SphereLeadfield Source => new(Head, SphereLeadfields.Electrodes(Inputs.GetProperty("electrode_position_m").Points()),
        SphereLeadfields.Channels(Inputs.GetProperty("meg_sensors"), CoilKind.Magnetometer));

    private static void Compare(PositionDerivative place, double[] rows, string expected, bool meanFree)
    {
        var l = new double[rows.Length / LeadfieldBlock.Lanes];
        var d = new double[3 * l.Length];
        place.Read(rows, l, d);
        double[] reference = Expected.GetProperty(expected).Flat();
        if (meanFree)
        {
            // Potentials are known up to a constant: both without their mean over the electrodes.
            d = MeanFree(d);
            reference = MeanFree(reference);
        }

        double largest = reference.Max(Math.Abs), worst = d.Zip(reference).Max(x => Math.Abs(x.First - x.Second));
        Assert.InRange(worst / largest, 0, DerivativeLimit);
    }

    private static double[] MeanFree(double[] values)
    {
        int rows = values.Length / 9;
        double[] mean = [.. Enumerable.Range(0, 9).Select(c => Enumerable.Range(0, rows).Sum(r => values[9 * r + c]) / rows)];
        return [.. values.Select((v, k) => v - mean[k % 9])];
    }

    private static LocationBound Bound(Vec3 position, string noise)
    {
        (double[] l, double[] d) = Whitened(position, noise);
        return new LocationBound(l, d);
    }

    private static (double[] Leadfield, double[] Derivative) Whitened(Vec3 position, string noise)
    {
        bool white = noise.EndsWith("white", StringComparison.Ordinal);
        JsonElement given = Inputs.GetProperty("noise");
        double[] eeg = white ? SmallStudy.Identity(64, given.GetProperty("eeg_white_variance_V2").GetDouble()) : given.GetProperty("eeg_corr_covariance_V2").Flat();
        double[] meg = white ? SmallStudy.Identity(60, given.GetProperty("meg_white_variance_T2").GetDouble()) : given.GetProperty("meg_corr_covariance_T2").Flat();
        string[] names = [.. Enumerable.Range(0, 64).Select(k => $"E{k}")];
        SphereLeadfield source = Source;
        var space = new SignalSpace(new NoiseCovariance { EegRows = 64, MegRows = 60, Eeg = eeg, Meg = meg },
            ChannelOperator.Reference(names, [.. names.Select(_ => 1.0 / 64)]), null, SphereLeadfields.Channels(Inputs.GetProperty("meg_sensors"), CoilKind.Magnetometer));
        Modality modality = noise[..3] switch { "eeg" => Modality.Eeg, "meg" => Modality.Meg, _ => Modality.Both };
        var white2 = new WhitenedLeadfield(space, modality);
        var place = new PositionDerivative(source, Head);
        Assert.True(place.Fill(position));
        var l = new double[3 * white2.Rows];
        var d = new double[9 * white2.Rows];
        place.Read(white2.Of(place.Block), l, d);
        return (l, d);
    }
}
