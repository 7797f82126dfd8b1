using DeepSourceCheck.Core.Attribution;
using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Spheres;
using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Sensors;

using MathNet.Numerics.Distributions;
using MathNet.Numerics.LinearAlgebra;

namespace DeepSourceCheck.Verification.Spheres;

/// <summary>
/// The bound against fits: 300 seeded maximum-likelihood fits of one dipole at high SNR scatter as the Cramer-Rao bound says. The fit is a plain Gauss-Newton on the six
/// parameters of Fisher's model and shares with the bound the leadfields alone. Source: asymptotic efficiency of maximum likelihood (any textbook of estimation).
/// </summary>
public class LocationFitTests
{
    private const int Fits = 300;

    // The rms of 300 errors with two to three degrees of freedom each has a standard error of 1/sqrt(2 x 300 x 2) to 4 % (one axis alone): four of them.
    private const double Scatter = 0.16;

    // Mean error of each axis over its standard deviation: 1/sqrt(300) = 0.058, four of them.
    private const double Bias = 0.24;

    private static LayeredSphere Head { get; } = new("test", Vec3.Zero,
        [new("brain", 0.08, 0.33, 0.33), new("skull", 0.086, 0.0132, 0.0132), new("scalp", 0.092, 0.33, 0.33)]);

    [Theory]
    [InlineData("EEG")]
    [InlineData("MEG")]
    [InlineData("EEG+MEG")]
    public void Fits_AtHighSnr_ScatterAsTheBoundSays(string modality)
    {
        Electrode[] electrodes = [.. Enumerable.Range(0, 40).Select(k => new Electrode($"E{k}", Head.OuterRadius * GoldenSpiral.Point(k, 40, -0.4), true, 0))];
        MegChannel[] channels = [.. Enumerable.Range(0, 60).Select(k =>
        {
            Vec3 up = GoldenSpiral.Point(k, 60, -0.3), tilted = (up + 0.4 * Vec3.Cross(up, new Vec3(0.3, 0.5, -0.8))).Unit();
            return new MegChannel($"M{k}", CoilKind.Magnetometer, [new(0.11 * up, tilted, 1)]);
        })];
        var source = new SphereLeadfield(Head, electrodes, channels);
        var space = new SignalSpace(
            new NoiseCovariance { EegRows = 40, MegRows = 60, Eeg = Diagonal(40, 1e-13), Meg = Diagonal(60, 1e-28) },
            ChannelOperator.Reference([.. electrodes.Select(e => e.Name)], [.. electrodes.Select(_ => 1.0 / 40)]), null, channels);
        var white = new WhitenedLeadfield(space, modality switch { "EEG" => Modality.Eeg, "MEG" => Modality.Meg, _ => Modality.Both });
        var place = new PositionDerivative(source, Head);
        Vec3 truth = new(0.012, -0.02, 0.045), outward = truth.Unit();
        // Tangential, so that MEG sees all of it; 100 nA m: a tenth of a millimetre to a few of bound.
        Vec3 moment = 1e-7 * Vec3.Cross(outward, new Vec3(0.2, 0.9, 0.1)).Unit();
        (double[] l, double[] d) = Read(place, white, truth);
        double[] covariance = new LocationBound(l, d).Covariance(moment)!;
        double bound = Math.Sqrt(covariance[0] + covariance[4] + covariance[8]);
        Assert.InRange(bound, 1e-5, 3e-3);

        var random = new Random(20);
        var errors = new List<Vec3>();
        for (int fit = 0; fit < Fits; fit++)
        {
            double[] data = [.. Enumerable.Range(0, white.Rows).Select(row => Field(l, row, moment) + Normal.Sample(random, 0, 1))];
            errors.Add(Fit(place, white, data, truth, modality == "MEG" ? 5 : 6) - truth);
        }

        double rms = Math.Sqrt(errors.Average(e => Vec3.Dot(e, e)));
        Assert.InRange(rms / bound, 1 - Scatter, 1 + Scatter);
        for (int axis = 0; axis < 3; axis++)
        {
            Assert.InRange(errors.Average(e => e[axis]) / Math.Sqrt(covariance[4 * axis]), -Bias, Bias);
        }
    }

    // Gauss-Newton from the true place: the local maximum that the bound speaks of. The moment is fitted anew at each place, by a pseudo-inverse of stated rank.
    private static Vec3 Fit(PositionDerivative place, WhitenedLeadfield white, double[] data, Vec3 start, int parameters)
    {
        const double Done = 1e-8;
        Vec3 at = start;
        for (int step = 0; step < 30; step++)
        {
            (double[] l, double[] d) = Read(place, white, at);
            Vector<double> b = Vector<double>.Build.Dense(data);
            Matrix<double> fields = Matrix<double>.Build.Dense(white.Rows, 3, (row, c) => l[3 * row + c]);
            Vector<double> q = Solve(fields, b, parameters - 3);
            var moment = new Vec3(q[0], q[1], q[2]);
            Matrix<double> jacobian = Matrix<double>.Build.Dense(white.Rows, 6, (row, c) => c < 3
                ? 1e-3 * (d[9 * row + c] * moment.X + d[9 * row + 3 + c] * moment.Y + d[9 * row + 6 + c] * moment.Z)
                : 1e-8 * l[3 * row + c - 3]);
            Vector<double> change = Solve(jacobian, b - fields * q, parameters);
            Vec3 moved = 1e-3 * new Vec3(change[0], change[1], change[2]);
            at += moved;
            if (moved.Norm < Done)
            {
                return at;
            }
        }

        Assert.Fail("a fit did not come to rest");
        return at;
    }

    private static Vector<double> Solve(Matrix<double> a, Vector<double> b, int rank)
    {
        var svd = a.Svd();
        Vector<double> projected = svd.U.TransposeThisAndMultiply(b);
        Vector<double> result = Vector<double>.Build.Dense(a.ColumnCount);
        for (int k = 0; k < rank; k++)
        {
            result += projected[k] / svd.S[k] * svd.VT.Row(k);
        }

        return result;
    }

    private static (double[] Leadfield, double[] Derivative) Read(PositionDerivative place, WhitenedLeadfield white, Vec3 position)
    {
        Assert.True(place.Fill(position));
        var l = new double[3 * white.Rows];
        var d = new double[9 * white.Rows];
        place.Read(white.Of(place.Block), l, d);
        return (l, d);
    }

    private static double Field(double[] l, int row, Vec3 q) => l[3 * row] * q.X + l[3 * row + 1] * q.Y + l[3 * row + 2] * q.Z;

    private static double[] Diagonal(int n, double variance)
    {
        var c = new double[n * n];
        for (int k = 0; k < n; k++)
        {
            c[k * n + k] = variance;
        }

        return c;
    }
}
