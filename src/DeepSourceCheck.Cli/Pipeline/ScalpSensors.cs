using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>Sensors about one real head: its scalp, landmarks and sites, found when they are first asked for.</summary>
internal sealed class ScalpSensors : IVoxelSensors
{
    // Below this an electrode's move onto the scalp is that of the voxels' steps.
    private const double MovedEnough = 1e-3;

    private readonly BuiltVoxelHead _built;
    private readonly ScalpSurface _scalp;
    private readonly Lazy<ScalpSites> _sites;
    private readonly List<string> _warnings = [];
    private readonly Dictionary<CoilArrayChoice, HeadArray> _arrays = [];

    /// <param name="built">The head.</param>
    /// <param name="landmarks">Landmarks that the study gives [m], by name.</param>
    /// <exception cref="InputException">A landmark is not one, or lies far from the scalp.</exception>
    public ScalpSensors(BuiltVoxelHead built, IReadOnlyDictionary<string, Vec3> landmarks)
    {
        _built = built;
        _scalp = ScalpSurface.Of(built.AsInFile);
        _sites = new(() =>
        {
            HeadLandmarks placed = LandmarkPlacement.On(_scalp, landmarks);
            _warnings.AddRange(placed.Warnings);
            return ScalpSites.Of(_scalp, placed);
        });
        if (landmarks.Count > 0)
        {
            _ = _sites.Value;                // a wrong landmark is refused even where no site is asked for
        }
    }

    /// <inheritdoc/>
    public IReadOnlyList<string> Warnings => [.. _warnings.Distinct()];

    /// <inheritdoc/>
    public Vec3 Centre => _built.Head.Sphere.Sphere.Centre;

    /// <inheritdoc/>
    public IReadOnlyList<Vec3> Sites(IReadOnlyList<string> names) =>
        [.. names.Select(name => _sites.Value.TryPosition(name, out Vec3 at) ? at : throw new InputException(null, "sensors.eeg", $"there is no site '{name}'{NearestName.Hint(name, ElectrodeLayout.Known)}"))];

    /// <inheritdoc/>
    public IReadOnlyList<Electrode> Project(IReadOnlyList<string> names, IReadOnlyList<Vec3> positions, string file)
    {
        Electrode[] placed = ElectrodePlacement.OnScalp(names, positions, _scalp, _built.Head.Volume, _warnings, file);
        if (placed.Where(e => !e.IsInterior).MaxBy(e => e.MovedBy) is { } farthest && farthest.MovedBy > MovedEnough)
        {
            _warnings.Add(string.Create(CultureInfo.InvariantCulture,
                $"{file}: electrodes were moved to the nearest place of the scalp, by {placed.Where(e => !e.IsInterior).Average(e => e.MovedBy) * 1000:0.0} mm on average and {farthest.MovedBy * 1000:0.0} mm at most ({farthest.Name})"));
        }

        return placed;
    }

    /// <inheritdoc/>
    public IReadOnlyList<MegChannel> Array(CoilArrayChoice choice) => Placed(choice).Channels;

    /// <inheritdoc/>
    public string Describe(CoilArrayChoice choice) => Placed(choice).Description;

    /// <inheritdoc/>
    public void CheckCoils(IReadOnlyList<MegChannel> channels, string file)
    {
        CoilPlacement.CheckOutside(_scalp, channels, file);
        if (CoilPlacement.TooNear(_scalp, channels, Voxel, file) is { } warning)
        {
            _warnings.Add(warning);
        }
    }

    private double Voxel => Math.Cbrt(_built.Head.Volume.Grid.VoxelVolume);

    private HeadArray Placed(CoilArrayChoice choice)
    {
        if (!_arrays.TryGetValue(choice, out HeadArray? array))
        {
            _arrays.Add(choice, array = HeadArray.Generate(choice, _scalp, _built.Head.Sphere));
            CoilPlacement.CheckGenerated(_scalp, array.Channels, Voxel, _warnings);
        }

        return array;
    }
}
