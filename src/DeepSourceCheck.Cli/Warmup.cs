using System.Security.Cryptography;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields.Spheres;
using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Report;

namespace DeepSourceCheck.Cli;

/// <summary>
/// A short run mostly waits for code to be loaded and compiled for the first time. What comes late in it is therefore run once on a second processor while the first reads arguments and study:
/// nothing of it enters a result.
/// </summary>
internal static class Warmup
{
    // Places of two blocks of dipoles [m] at a depth of the noise's own; their number only has to fill a block.
    private const int Places = 16, Sites = 12;
    private const double Radius = 0.07;

    /// <summary>Begins, where the command will compute and there is a second processor.</summary>
    /// <param name="command">First argument.</param>
    public static void Begin(string? command)
    {
        if (command is "check" or "assess" or "why" && Environment.ProcessorCount > 1)
        {
            ThreadPool.UnsafeQueueUserWorkItem(static of => Run((string)of!), command);
        }
    }

    private static void Run(string command)
    {
        try
        {
            Noise();
            SHA256.HashData([]);
            if (command == "assess")
            {
                ReportWriter.Warm();
            }
        }
        catch (Exception)
        {
            // What is wrong shows where it is needed, with the words for it.
        }
    }

    private static void Noise()
    {
        var head = new LayeredSphere("sphere", Vec3.Zero, SpherePreset.Find("adult")!.SphereLayers());
        Electrode[] electrodes = ElectrodeLayout.OnSphere("ten-twenty-21", head, []);
        MegChannel[] channels = CoilArray.Generate(
            new CoilArrayChoice("axial-gradiometer", Sites, 0.06, DefaultNoiseTables.MagnetometerGap, CoilArray.DefaultEdgeFront, CoilArray.DefaultEdgeBack), head.Centre, head.OuterRadius);
        var source = new SphereLeadfield(head, electrodes, channels);
        var places = new Vec3[Places];
        for (int k = 0; k < places.Length; k++)
        {
            places[k] = Radius * GoldenSpiral.Point(k, Places);
        }

        var weights = new double[electrodes.Length];
        (weights[0], weights[1]) = (1, -1);
        BackgroundField field = BackgroundField.Compute(places, source, source, weights);
        var choice = new NoiseChoice { EegDensity = 1e-9, MegDensity = 1e-15, EegTotal = new EegTotalChoice(1e-3, DefaultNoiseTables.Derivation, new Band(100, 3000)) };
        new NoiseBuilder(choice, electrodes.Length, Array.ConvertAll(channels, c => c.Kind), field, weights).Build(null, null, []).InBand(100, 200);
    }
}
