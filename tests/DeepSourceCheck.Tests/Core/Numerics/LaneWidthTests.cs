using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Directions;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Spheres;
using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Numerics;
using DeepSourceCheck.Core.Sensors;

namespace DeepSourceCheck.Tests.Core.Numerics;

/// <summary>
/// Every kernel gives the same bits at every width of the registers: what its own tests say of the width that this processor runs in then holds for all. .ci/run repeats those tests
/// with vectors switched off.
/// </summary>
public class LaneWidthTests
{
    private const int Lanes = LeadfieldBlock.Lanes;

    /// <summary>Runs a kernel at one width and returns all that it wrote.</summary>
    private interface IKernel
    {
        double[] Run<T>()
            where T : struct, ILaneVector<T>;
    }

    private sealed record Eeg(double AcrossRadius, int Electrodes) : IKernel
    {
        public double[] Run<T>()
            where T : struct, ILaneVector<T>
        {
            LayeredSphere head = new("two", Vec3.Zero, [new("brain", 0.08, 0.33, 0.33 * AcrossRadius), new("skull", 0.09, 0.01, 0.01)]);
            Electrode[] electrodes = [.. Enumerable.Range(0, Electrodes).Select(k => new Electrode($"E{k}", 0.09 * GoldenSpiral.Point(k, Electrodes), true, 0))];
            var values = new double[3 * Lanes * Electrodes];
            new EegLayerSeries(head, electrodes).Fill<T>(values, Random(3 * Lanes, 0.5), 31);
            return values;
        }
    }

    private sealed record Meg : IKernel
    {
        public double[] Run<T>()
            where T : struct, ILaneVector<T>
        {
            MegChannel[] channels = [.. Enumerable.Range(0, 5).Select(k =>
            {
                Vec3 axis = GoldenSpiral.Point(k, 5);
                return new MegChannel($"M{k}", CoilKind.AxialGradiometer, [new(0.12 * axis, axis, 1), new(0.17 * axis, axis, -1)]);
            })];
            var values = new double[3 * Lanes * channels.Length];
            new MegSphere(Vec3.Zero, channels).Fill<T>(values, Random(3 * Lanes, 0.04));
            return values;
        }
    }

    private sealed record Split(int Rows, double Scale) : IKernel
    {
        public double[] Run<T>()
            where T : struct, ILaneVector<T>
        {
            var split = new SplitBlock();
            DirectionSplit.Compute<T>(Random(3 * Lanes * Rows, Scale), Rows, Random(3 * Lanes, 1), split);
            return [.. split.SingularValues, .. split.Directions];
        }
    }

    private sealed record Reference : IKernel
    {
        public double[] Run<T>()
            where T : struct, ILaneVector<T>
        {
            string[] names = ["a", "b", "c"];
            double[] input = Random(3 * Lanes * names.Length, 1), output = new double[input.Length];
            ChannelOperator.Reference(names, [0.25, 0, 0.75]).Apply<T>(ref input[0], ref output[0]);
            return output;
        }
    }

    private sealed record Removing(int Terms) : IKernel
    {
        public double[] Run<T>()
            where T : struct, ILaneVector<T>
        {
            string[] names = ["a", "b", "c", "d", "e"];
            double[] input = Random(3 * Lanes * names.Length, 1), output = new double[input.Length];
            ChannelOperator.Removal(names, [.. Enumerable.Range(1, Terms).Select(t => (Random(names.Length, t), Random(names.Length, 2 * t)))]).Apply<T>(ref input[0], ref output[0]);
            return output;
        }
    }

    private sealed record Whitening(int Rows) : IKernel
    {
        public double[] Run<T>()
            where T : struct, ILaneVector<T>
        {
            double[] covariance = [.. Enumerable.Range(0, Rows * Rows).Select(k => k / Rows == k % Rows ? 2.0 : 1.0 / (1 + Math.Abs(k / Rows - k % Rows)))];
            double[] input = Random(3 * Lanes * Rows, 1), output = new double[input.Length];
            Whitener.Of(covariance, Rows).Apply<T>(ref input[0], ref output[0]);
            return output;
        }
    }

    private sealed record Eigenvalue : IKernel
    {
        public double[] Run<T>()
            where T : struct, ILaneVector<T>
        {
            double[] e = Random(6 * Lanes, 1);
            var values = new double[Lanes];
            for (nuint k = 0; k < Lanes; k += (nuint)T.Count)
            {
                SymmetricEigen3.Largest(T.Load(ref e[0], k), T.Load(ref e[0], k + 8), T.Load(ref e[0], k + 16), T.Load(ref e[0], k + 24), T.Load(ref e[0], k + 32), T.Load(ref e[0], k + 40))
                    .Store(ref values[0], k);
            }

            return values;
        }
    }

    private static IKernel[] Kernels { get; } =
    [
        new Eeg(1, 1), new Eeg(1, 3), new Eeg(1, 4), new Eeg(1, 7), new Eeg(1, 12), new Eeg(0.5, 7), new Meg(), new Reference(), new Removing(1), new Removing(8), new Eigenvalue(),
        new Split(0, 1), new Split(1, 1), new Split(2, 1), new Split(3, 1), new Split(40, 1), new Split(291, 1e9), new Split(41, 1e-170), new Split(41, 1e170),
        new Whitening(1), new Whitening(3), new Whitening(4), new Whitening(5), new Whitening(8), new Whitening(13), new Whitening(40),
    ];

    [Fact]
    public void Kernels_AtEveryWidth_GiveTheSameBits() => Assert.All(Kernels, kernel =>
    {
        double[] eight = kernel.Run<EightLanes>();
        Assert.True(kernel is Split { Rows: 0 } || eight.Any(v => v != 0 && double.IsFinite(v)));
        Assert.Equal(eight, kernel.Run<FourLanes>());
        Assert.Equal(eight, kernel.Run<TwoLanes>());
    });

    [Fact]
    public void Width_IsTheWidestThatTheProcessorRunsInRegisters()
    {
        int[] widths = [.. new[] { (Vector512.IsHardwareAccelerated, EightLanes.Count), (Vector256.IsHardwareAccelerated, FourLanes.Count), (true, TwoLanes.Count) }.Where(w => w.Item1).Select(w => w.Item2)];
        Assert.Equal(widths.Max(), LaneWidth.Lanes);
        Assert.All(new[] { EightLanes.Count, FourLanes.Count, TwoLanes.Count }, count => Assert.Equal(0, Lanes % count));
    }

    [Theory]
    [InlineData(0)]
    [InlineData(2)]
    public void Operators_ThatGetTooFewValues_AreRefused(int missing)
    {
        string[] names = ["a", "b"];
        double[] enough = new double[3 * Lanes * 2], short1 = new double[3 * Lanes * 2 - 1 - missing];
        ChannelOperator reference = ChannelOperator.Reference(names, [0.5, 0.5]);
        Assert.Throws<ArgumentException>(() => reference.Apply(enough, short1));
        Assert.Throws<ArgumentException>(() => reference.Apply(short1, enough));
        Whitener whitener = Whitener.Of([2, 1, 1, 2], 2);
        Assert.Throws<ArgumentException>(() => whitener.Apply(enough, short1));
        Assert.Throws<ArgumentException>(() => whitener.Apply(short1, enough));
    }

    private static double[] Random(int count, double scale)
    {
        var random = new Random(count);
        return [.. Enumerable.Range(0, count).Select(_ => scale * (random.NextDouble() - 0.5))];
    }
}
