using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Numerics;
using DeepSourceCheck.Core.Studies;

using MathNet.Numerics.Distributions;

namespace DeepSourceCheck.Core.Planning.Unknowns;

/// <summary>One draw of everything that is not known.</summary>
/// <param name="MomentFactor">Moment over the typical one, without unit.</param>
/// <param name="NoiseFactor">Factor on every noise amplitude, without unit.</param>
/// <param name="Head">Head and array; null where they are nominal.</param>
internal sealed record Draw(double MomentFactor, double NoiseFactor, HeadPerturbation? Head);

/// <summary>Draws over the unknowns of a study, from one low-discrepancy stream that never changes: coordinates belong to unknowns, so that another unknown leaves their values.</summary>
internal sealed class UnknownDraws
{
    /// <summary>Draws for an unknown on its own.</summary>
    public const int Alone = 64;

    private const int Moment = 0, Skull = 1, Noise = 2, HeadFrom = 3, CentreFrom = 6, Dimensions = 9;

    private readonly UnknownsChoice _choice;
    private readonly MomentRange? _range;
    private readonly double _typical;
    private readonly SobolSequence _stream = new(Dimensions);

    /// <param name="choice">What is not known.</param>
    /// <param name="response">The response, whose moment may have a range.</param>
    public UnknownDraws(UnknownsChoice choice, Response response)
    {
        _choice = choice;
        _range = response.MomentRange;
        _typical = response.Moment;
        Names =
        [
            .. _range is null ? Array.Empty<string>() : ["moment_nAm"],
            .. choice.SkullRatio is null ? Array.Empty<string>() : ["skull_conductivity_ratio"],
            .. choice.NoiseFactor is null ? Array.Empty<string>() : ["noise_factor"],
            .. choice.HeadShift > 0 ? ["head_shift_mm"] : Array.Empty<string>(),
            .. choice.CentreShift > 0 ? ["centre_shift_mm"] : Array.Empty<string>(),
        ];
    }

    /// <summary>Keys of what varies for this response.</summary>
    public IReadOnlyList<string> Names { get; }

    /// <summary>A draw of all unknowns at once.</summary>
    /// <param name="index">Number of the draw, from 0.</param>
    public Draw All(int index) => At(index, null);

    /// <summary>A draw of one unknown, the others as nominal.</summary>
    /// <param name="index">Number of the draw, from 0.</param>
    /// <param name="name">Which unknown.</param>
    public Draw Single(int index, string name) => At(index, name);

    /// <summary>A single number at its 5 or 95 % point, the others as nominal; null for shifts.</summary>
    /// <param name="name">Which unknown.</param>
    /// <param name="high">True for the 95 % point.</param>
    public (Draw Draw, double Value)? End(string name, bool high)
    {
        double z = high ? Spread.Z95 : -Spread.Z95;
        return name switch
        {
            "moment_nAm" => (Of(z, 0, 0, default, default, name), MomentSpread.At(z)),
            "skull_conductivity_ratio" => (Of(0, z, 0, default, default, name), _choice.SkullRatio!.At(z)),
            "noise_factor" => (Of(0, 0, z, default, default, name), _choice.NoiseFactor!.At(z)),
            _ => null,
        };
    }

    private Spread MomentSpread => new(_range!.Low, _typical, _range.High);

    private Draw At(int index, string? only)
    {
        Span<double> u = stackalloc double[Dimensions];
        _stream.Point((uint)index, u);
        Span<double> z = stackalloc double[Dimensions];
        for (int k = 0; k < Dimensions; k++)
        {
            z[k] = Normal.InvCDF(0, 1, u[k]);
        }

        return Of(z[Moment], z[Skull], z[Noise], new(z[HeadFrom], z[HeadFrom + 1], z[HeadFrom + 2]), new(z[CentreFrom], z[CentreFrom + 1], z[CentreFrom + 2]), only);
    }

    private Draw Of(double moment, double skull, double noise, Vec3 head, Vec3 centre, string? only)
    {
        bool Varies(string name) => Names.Contains(name) && (only is null || only == name);
        double? ratio = Varies("skull_conductivity_ratio") ? _choice.SkullRatio!.At(skull) : null;
        Vec3 headShift = Varies("head_shift_mm") ? _choice.HeadShift * head : default, centreShift = Varies("centre_shift_mm") ? _choice.CentreShift * centre : default;
        bool perturbed = ratio is not null || headShift != default || centreShift != default;
        return new Draw(
            Varies("moment_nAm") ? MomentSpread.At(moment) / _typical : 1,
            Varies("noise_factor") ? _choice.NoiseFactor!.At(noise) : 1,
            perturbed ? new HeadPerturbation { SkullRatio = ratio, HeadShift = headShift, CentreShift = centreShift } : null);
    }
}
