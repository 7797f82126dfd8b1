using System.Diagnostics;

using DeepSourceCheck.Core.Heads.Voxels.Phantom;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Verification.Phantom;

/// <summary>The phantom's claims at 1 mm, where shapes are what they were meant to be, and at newborn size.</summary>
public class PhantomAtFullResolutionTests
{
    private static readonly Lazy<PhantomHead> Adult = new(() => PhantomHead.Generate(PhantomKind.Adult, 0.001));
    private static readonly Lazy<PhantomHead> Neonate = new(() => PhantomHead.Generate(PhantomKind.Neonate, 0.001));

    [Fact]
    public void Adult_HasPublishedVolumes() => PhantomClaims.AdultVolumes(Adult.Value);

    [Fact]
    public void Adult_HoldsTheLibrarysRegions() => PhantomClaims.LibraryRegions(Adult.Value);

    [Fact]
    public void Adult_LeaksAtTheBaseAlone() => PhantomClaims.NoLeak(Adult.Value);

    // From memory: 2 to 3 mm at the temporal squama, 8 to 9 mm at the occiput, more over the frontal sinus; half a voxel either way.
    [Fact]
    public void AdultSkull_IsThinAtTheTempleAndThickBehind()
    {
        double[] thickness = [.. PhantomClaims.VaultThickness(Adult.Value).Order()];
        Assert.InRange(1000 * thickness[thickness.Length / 200], 2, 3.5);
        Assert.InRange(1000 * thickness[^(thickness.Length / 50)], 7.5, 11);
        Assert.InRange(1000 * thickness.Average(), 5.97 - 1.19, 5.97 + 1.19);
    }

    // From memory: 300 to 450 mL of brain at birth.
    [Fact]
    public void Neonate_HasANewbornsBrain()
    {
        double[] v = PhantomClaims.Volumes(Neonate.Value);
        Assert.InRange(v[PhantomHead.Grey] + v[PhantomHead.White], 300, 450);
        Assert.True(v[PhantomHead.SpongyBone] == 0);
    }

    [Fact]
    public void Neonate_HoldsTheScaledLibrarysRegions() => PhantomClaims.LibraryRegions(Neonate.Value);

    [Fact]
    public void Neonate_LeaksAtTheBaseAlone() => PhantomClaims.NoLeak(Neonate.Value);

    // The goals are 10 s at 1 mm and 2 s at 2 mm on two idle cores; processor time does not count the neighbours of a busy machine.
    [Theory]
    [InlineData(0.001, 20)]
    [InlineData(0.002, 4)]
    public void Generation_TakesLittleProcessorTime(double voxel, double most)
    {
        PhantomHead.Generate(PhantomKind.Adult, 0.003);
        Stopwatch wall = Stopwatch.StartNew();
        TimeSpan before = Process.GetCurrentProcess().TotalProcessorTime;
        PhantomHead.Generate(PhantomKind.Adult, voxel);
        double used = Math.Min((Process.GetCurrentProcess().TotalProcessorTime - before).TotalSeconds, wall.Elapsed.TotalSeconds * 2);
        Assert.True(used < most, $"{used:F1} s");
    }
}
