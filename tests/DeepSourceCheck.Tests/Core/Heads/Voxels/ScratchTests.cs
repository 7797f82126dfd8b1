using System.Diagnostics;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Tests.Support;
using Xunit.Abstractions;

namespace DeepSourceCheck.Tests.Core.Heads.Voxels;

public class ScratchTests(ITestOutputHelper o)
{
    [Theory]
    [InlineData("head_2mm.nii.gz")]
    [InlineData("head_1mm.nii.gz")]
    public void Real(string file)
    {
        TissueVolume v = LabelledHeads.ReadReal(file);
        for (int rep = 0; rep < 2; rep++)
        {
            var w = Stopwatch.StartNew();
            ScalpSurface s = ScalpSurface.Of(v);
            o.WriteLine($"build {w.Elapsed.TotalSeconds:0.000} s, {s.Samples.Length} samples, deviation {s.FaceDeviation * 1000:0.00} {s.LargestFaceDeviation * 1000:0.00} cut {string.Join(",", s.CutFaces)}");
            w.Restart();
            HeadLandmarks found = LandmarkFinder.Find(s);
            o.WriteLine($"find {w.Elapsed.TotalSeconds:0.000}");
            var refl = LabelledHeads.RealLandmarks();
            foreach (Landmark l in found.All) o.WriteLine($"{l.Name} {l.Position * 1000} off {(l.Position - refl[l.Name]).Norm * 1000:0.0} unc {l.Uncertainty * 1000:0.0}");
            foreach (string t in found.Warnings) o.WriteLine(t);
            w.Restart();
            foreach ((string k, Vec3 p) in refl) o.WriteLine($"{k} given, distance {s.Nearest(p).SignedDistance * 1000:0.00}");
            o.WriteLine($"nearest x4 {w.Elapsed.TotalSeconds:0.000}");
            w.Restart();
            HeadSphere hs = HeadSphere.Of(v, s);
            o.WriteLine($"sphere {hs.Sphere.Centre * 1000} R {hs.Sphere.Radius * 1000:0.0} rms {hs.Sphere.Rms * 1000:0.0} {w.Elapsed.TotalSeconds:0.000}");
            foreach (string coil in new[] { "magnetometer", "on-scalp" })
            {
                w.Restart();
                HeadArray a = HeadArray.Generate(new(coil, 200, 0, coil == "on-scalp" ? 0.007 : 0.03, CoilArray.DefaultEdgeFront, CoilArray.DefaultEdgeBack), s, hs);
                o.WriteLine($"{a.Description} {a.Helmet?.Centre * 1000} {w.Elapsed.TotalSeconds:0.000}");
            }
            foreach (HeadLandmarks l in new[] { LandmarkPlacement.On(s, refl), found })
            {
                w.Restart();
                ScalpSites sites = ScalpSites.Of(s, l);
                o.WriteLine($"sites {w.Elapsed.TotalSeconds:0.000} midline {sites.MidlineLength * 1000:0.0} coronal {sites.CoronalLength * 1000:0.0} cz off {sites.CzOffCoronal * 1000:0.000}");
                List<double> d = [];
                string t = "";
                foreach ((string n, Vec3 p) in LabelledHeads.RealSites())
                {
                    sites.TryPosition(n, out Vec3 q);
                    d.Add((p - q).Norm * 1000);
                    t += $"{n} {d[^1]:0.0} ";
                }
                o.WriteLine($"mean {d.Average():0.00} max {d.Max():0.00}: {t}");
                sites.TryPosition("M1", out Vec3 m1); sites.TryPosition("M2", out Vec3 m2);
                o.WriteLine($"M1 {m1 * 1000} M2 {m2 * 1000}");
            }
        }
    }

    [Theory]
    [InlineData(0.001)]
    [InlineData(0.002)]
    [InlineData(0.004)]
    public void Ball(double h)
    {
        Vec3 c = new(0.0013, -0.0027, 0.0041);
        ScalpSurface s = ScalpSurface.Of(LabelledHeads.Sphere(h, c));
        double worst = 0, sum = 0, angle = 0, mean = 0, asum = 0, pa = 0; int n = 1000;
        for (int k = 0; k < n; k++)
        {
            Vec3 d = GoldenSpiral.Point(k, n);
            Vec3 p = s.Outermost(c, d)!.Value;
            double e = (p - c).Norm - 0.092;
            worst = Math.Max(worst, Math.Abs(e)); sum += e * e; mean += e;
            double a = TestHeads.AngleDeg(s.Normal(p), d); pa = Math.Max(pa, TestHeads.AngleDeg(s.PatchNormal(p, 0.008), d)); angle = Math.Max(angle, a); asum += a * a;
        }
        o.WriteLine($"h {h}: mean {mean / n * 1000:0.000} rms {Math.Sqrt(sum / n) * 1000:0.000} worst {worst * 1000:0.000} mm; normal rms {Math.Sqrt(asum / n):0.00} worst {angle:0.00} deg patch {pa:0.00}; faces {s.FaceDeviation * 1000:0.00} {s.LargestFaceDeviation * 1000:0.00}");
        o.WriteLine($"nearest from 60 mm off {s.Nearest(c + 0.152 * new Vec3(0.6, 0, 0.8)).SignedDistance * 1000:0.000}, 30 mm inside {s.Nearest(c + 0.062 * new Vec3(0.6, 0, 0.8)).SignedDistance * 1000:0.000}");
        o.WriteLine($"mastoid shares {ScalpSites.MastoidShares()}");
    }
}
