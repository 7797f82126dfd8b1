using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Files.Studies;

/// <summary>`unknowns`: how far inputs may be off.</summary>
internal static class UnknownsBinder
{
    // Conductivities that are equal but for the rounding of a quotient are equal.
    private const double SameRatio = 1e-12;

    private static readonly string[] OfTheHead = ["skull_conductivity_ratio", "head_shift_mm", "centre_shift_mm"];

    /// <summary>The unknowns, and the head with the typical skull in it.</summary>
    public static (UnknownsChoice? Unknowns, HeadChoice? Head) Bind(
        Section root, HeadChoice? head, IReadOnlyList<Response> responses, BoundSensors sensors, Protocol? protocol, Reading reading)
    {
        if (root.Map("unknowns") is not { } unknowns)
        {
            return (null, head);
        }

        Spread? skull = Spread(unknowns, "skull_conductivity_ratio"), noise = Spread(unknowns, "noise_factor");
        double headShift = Si.FromMm(unknowns.Number("head_shift_mm") ?? 0), centreShift = Si.FromMm(unknowns.Number("centre_shift_mm") ?? 0);
        double? samples = unknowns.Number("samples");
        HeadChoice? varied = skull is null ? head : WithSkull(unknowns, head, skull);
        if (head is not null and not SphereHeadChoice)
        {
            string kind = head is VoxelHeadChoice ? "head.voxels" : "head.leadfields";
            foreach (string name in OfTheHead.Where(unknowns.States))
            {
                unknowns.Problem(name, head is VoxelHeadChoice && name != "centre_shift_mm"
                    ? $"not supported yet with {kind}, which would be solved anew for each draw: remove it here, and state variants with other conductivities or gaps instead"
                    : $"has no meaning with {kind}, which {(head is VoxelHeadChoice ? "has no sphere whose centre could be off" : "holds one head as it is")}: remove it");
            }
        }

        if (responses.Any(r => r.EegMeasure == Names.RealisticFilter || r.MegMeasure == Names.RealisticFilter))
        {
            unknowns.Problem("stands beside a measure realistic-filter, whose errors of place, head and covariance are a spread of their own; let the verdict stand on matched-filter or a single reading, or remove unknowns");
        }

        if (!sensors.HasEeg && skull is not null)
        {
            unknowns.WithoutEffect("skull_conductivity_ratio", "the study has no electrodes, and in a sphere MEG does not depend on conductivity");
            skull = null;
        }

        if (noise is { Typical: not 1 })
        {
            unknowns.Warn("noise_factor.typical", $"figures without unknowns stand at the stated noise, those over the unknowns at {KeyShape.Text(noise.Typical)} times it; state the noise as you expect it, and 1 here, to have both agree");
        }

        if (!sensors.HasMeg && headShift > 0)
        {
            unknowns.WithoutEffect("head_shift_mm", "the study has no MEG sensors, and electrodes move with the head");
            headShift = 0;
        }

        if (skull is null && noise is null && headShift == 0 && centreShift == 0 && !responses.Any(r => r.MomentRange is not null) && reading.Problems.Count == 0)
        {
            unknowns.Problem("leaves nothing to vary; state skull_conductivity_ratio, noise_factor, head_shift_mm or centre_shift_mm, or a response's moment_nAm as {low, typical, high}");
        }

        if (protocol?.Session is null)
        {
            unknowns.Warn("samples", "without protocol.session_min there is a spread of trials but no assurance");
        }

        return (samples is not { } n ? null : new()
        {
            SkullRatio = skull,
            NoiseFactor = noise,
            HeadShift = headShift,
            CentreShift = centreShift,
            Samples = (int)n,
        }, varied);
    }

    private static Spread? Spread(Section unknowns, string name)
    {
        if (unknowns.Map(name) is not { } map)
        {
            return null;
        }

        double? low = map.Number("low"), typical = map.Number("typical"), high = map.Number("high");
        if (low is not { } a || typical is not { } b || high is not { } c)
        {
            return null;
        }

        if (a <= b && b <= c)
        {
            return new(a, b, c);
        }

        map.Problem($"{KeyShape.Text(a)}, {KeyShape.Text(b)}, {KeyShape.Text(c)} are not ordered; low must be at most typical, and typical at most high");
        return null;
    }

    private static HeadChoice? WithSkull(Section unknowns, HeadChoice? head, Spread skull)
    {
        if (head is not SphereHeadChoice spheres)
        {
            return head;
        }

        if (SkullRatio.Of(spheres.Sphere) is not { } own)
        {
            unknowns.Problem("skull_conductivity_ratio", "no layer of the head is called skull; name it so, or remove this key");
            return head;
        }

        if (Math.Abs(own / skull.Typical - 1) <= SameRatio)
        {
            return head;
        }

        unknowns.Warn("skull_conductivity_ratio.typical", $"{KeyShape.Text(skull.Typical)} replaces the head's own ratio of {KeyShape.Text(Math.Round(own, 2))} in every figure");
        return spheres with { Sphere = SkullRatio.With(spheres.Sphere, skull.Typical) };
    }
}
