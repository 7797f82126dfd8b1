using BenchmarkDotNet.Attributes;

namespace DeepSourceCheck.Benchmarks;

/// <summary>The kernels one by one, each over <see cref="KernelWork.Dipoles"/> dipoles; memory shows that none is taken.</summary>
[MemoryDiagnoser]
public class KernelBenchmarks
{
    private KernelWork _work = null!;

    [GlobalSetup]
    public void Prepare() => _work = new KernelWork();

    [Benchmark]
    public void EegFourLayers() => _work.Eeg();

    [Benchmark]
    public void Meg() => _work.Meg();

    [Benchmark]
    public void Split() => _work.Split();

    [Benchmark]
    public double Projections() => _work.Project();

    [Benchmark]
    public void DenseWhitening() => _work.Whiten();

    [Benchmark]
    public double MultiplyAddPeak() => _work.MultiplyAdds();
}
