using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Directions;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Spheres;
using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Numerics;
using DeepSourceCheck.Core.Sensors;

namespace DeepSourceCheck.Benchmarks;

/// <summary>
/// What the kernels are timed on: dipoles evenly within 0.6 of the inner radius of the adult head of four layers, sorted by depth in blocks of eight, 64 electrodes, 291 axial
/// gradiometers of two points. One pass of each kernel runs over <see cref="Dipoles"/> dipoles, results stay in a block.
/// </summary>
public sealed class KernelWork
{
    /// <summary>Dipoles of one pass.</summary>
    public const int Dipoles = 4096;

    /// <summary>Electrodes.</summary>
    public const int Electrodes = 64;

    /// <summary>Axial gradiometers.</summary>
    public const int Channels = 291;

    /// <summary>Multiply-adds of one pass of <see cref="MultiplyAdds()"/>.</summary>
    public const long PeakMultiplyAdds = 2_000_000L * Chains * 8;

    /// <summary>Twelve chains, a factor and a term fit sixteen registers, and hide a latency of four at two a clock.</summary>
    private const int Chains = 12;

    private const int Lanes = LeadfieldBlock.Lanes;
    private readonly LayeredSphere _head;
    private readonly EegLayerSeries _eeg;
    private readonly MegSphere _meg;
    private readonly Vec3[] _positions;
    private readonly LeadfieldBlock _block = new(Electrodes, Channels), _filled = new(Electrodes, Channels);
    private readonly SplitBlock _split = new();
    private readonly Whitener _whitener;
    private readonly double _multiplier = 0.999999;
    private readonly double[] _white = new double[Channels * 3 * Lanes];
    private readonly LaneDirection _direction = LaneDirection.Same(new Vec3(0.3, -0.5, 0.8).Unit());

    public KernelWork()
    {
        (string Tissue, double Radius, double Conductivity)[] layers = [("brain", 0.078, 0.33), ("csf", 0.080, 1.79), ("skull", 0.086, 0.0132), ("scalp", 0.092, 0.43)];
        _head = new LayeredSphere("adult", Vec3.Zero, [.. layers.Select(l => new SphereLayer(l.Tissue, l.Radius, l.Conductivity, l.Conductivity))]);
        Electrode[] electrodes = [.. Enumerable.Range(0, Electrodes).Select(k => new Electrode($"E{k}", 0.092 * GoldenSpiral.Point(k, Electrodes, -0.5), true, 0))];
        MegChannel[] channels = [.. Enumerable.Range(0, Channels).Select(k =>
        {
            Vec3 axis = GoldenSpiral.Point(k, Channels, -0.4);
            return new MegChannel($"M{k}", CoilKind.AxialGradiometer, [new(0.122 * axis, axis, 1), new(0.182 * axis, axis, -1)]);
        })];
        _eeg = new EegLayerSeries(_head, electrodes);
        _meg = new MegSphere(Vec3.Zero, channels);
        var random = new Random(1);
        _positions = [.. Enumerable.Range(0, Dipoles)
            .Select(k => 0.6 * 0.078 * Math.Cbrt(random.NextDouble()) * GoldenSpiral.Point(k * 1999 % Dipoles, Dipoles)).OrderBy(p => p.Norm)];
        _filled.Load(_positions.AsSpan(Dipoles - Lanes), default);
        _meg.Fill(_filled);
        Degrees = _positions.Chunk(Lanes).Average(block => block.Max(_eeg.DegreeAt));
        _whitener = Whitener.Of(Covariance(random), Channels);
    }

    /// <summary>Degrees of the EEG series, mean over blocks.</summary>
    public double Degrees { get; }

    /// <summary>Operations of whitening one dipole, padding and zeros left out: a multiplication and an addition for each entry of the triangle and axis.</summary>
    public static double WhiteningFlops => 2.0 * 3 * Channels * (Channels + 1) / 2;

    /// <summary>EEG leadfields.</summary>
    public void Eeg()
    {
        for (int k = 0; k < Dipoles; k += Lanes)
        {
            _block.Load(_positions.AsSpan(k, Lanes), default);
            _eeg.Fill(_block);
        }
    }

    /// <summary>MEG leadfields.</summary>
    public void Meg()
    {
        for (int k = 0; k < Dipoles; k += Lanes)
        {
            _block.Load(_positions.AsSpan(k, Lanes), default);
            _meg.Fill(_block);
        }
    }

    /// <summary>Split of directions of 291 x 3.</summary>
    public void Split()
    {
        for (int k = 0; k < Dipoles; k += Lanes)
        {
            DirectionSplit.Compute(_filled.Meg, Channels, _filled, _head, _split);
        }
    }

    /// <summary>Channel mean and best channel of one direction over 291 rows.</summary>
    public double Project()
    {
        Vector512<double> sum = default;
        for (int k = 0; k < Dipoles; k += Lanes)
        {
            sum += DeepSourceCheck.Core.Detection.Lanes.ProjectedPower(_filled.Meg, Channels, _direction);
            sum += DeepSourceCheck.Core.Detection.Lanes.Largest(_filled.Meg, Channels, _direction, out Vector512<double> index) + index;
        }

        return sum[0];
    }

    /// <summary>Dense whitening of 291 channels.</summary>
    public void Whiten()
    {
        for (int k = 0; k < Dipoles; k += Lanes)
        {
            _whitener.Apply(_filled.Meg, _white);
        }
    }

    /// <summary>Independent chains of multiply-adds in registers, as wide as they are: the processor's peak.</summary>
    public double MultiplyAdds() => LaneWidth.Lanes switch
    {
        8 => MultiplyAdds<EightLanes>(),
        4 => MultiplyAdds<FourLanes>(),
        _ => MultiplyAdds<TwoLanes>(),
    };

    private double MultiplyAdds<T>()
        where T : struct, ILaneVector<T>
    {
        T m = T.All(_multiplier), c = T.All(1e-9);
        T a0 = c, a1 = c, a2 = c, a3 = c, a4 = c, a5 = c, b0 = c, b1 = c, b2 = c, b3 = c, b4 = c, b5 = c;
        for (long k = PeakMultiplyAdds / (Chains * T.Count); k > 0; k--)
        {
            a0 = T.MultiplyAdd(a0, m, c);
            a1 = T.MultiplyAdd(a1, m, c);
            a2 = T.MultiplyAdd(a2, m, c);
            a3 = T.MultiplyAdd(a3, m, c);
            a4 = T.MultiplyAdd(a4, m, c);
            a5 = T.MultiplyAdd(a5, m, c);
            b0 = T.MultiplyAdd(b0, m, c);
            b1 = T.MultiplyAdd(b1, m, c);
            b2 = T.MultiplyAdd(b2, m, c);
            b3 = T.MultiplyAdd(b3, m, c);
            b4 = T.MultiplyAdd(b4, m, c);
            b5 = T.MultiplyAdd(b5, m, c);
        }

        var sum = new double[T.Count];
        (a0 + a1 + a2 + a3 + a4 + a5 + b0 + b1 + b2 + b3 + b4 + b5).Store(ref sum[0], 0);
        return sum[0];
    }

    private static double[] Covariance(Random random)
    {
        double[] a = [.. Enumerable.Range(0, Channels * Channels).Select(_ => random.NextDouble() - 0.5)];
        var c = new double[Channels * Channels];
        for (int i = 0; i < Channels; i++)
        {
            for (int j = 0; j <= i; j++)
            {
                double sum = i == j ? 10 : 0;
                for (int k = 0; k < Channels; k++)
                {
                    sum += a[i * Channels + k] * a[j * Channels + k];
                }

                c[i * Channels + j] = c[j * Channels + i] = sum;
            }
        }

        return c;
    }
}
