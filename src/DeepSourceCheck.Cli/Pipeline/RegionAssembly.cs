using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Leadfields.Imported;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Files.Nifti;
using DeepSourceCheck.Files.Regions;
using DeepSourceCheck.Files.Studies;
using DeepSourceCheck.Files.Tables;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>The regions of a study, filled: its own in their order, then those of the library that responses name.</summary>
internal sealed class RegionAssembly
{
    /// <summary>Memory of one dipole while a region is filled [bytes]: positions, rows and the lists that they grow in.</summary>
    private const long BytesADipole = 150;

    private readonly StudyReading _reading;
    private readonly SensorAssembly _sensors;
    private readonly InputDigests _inputs;
    private readonly Dictionary<string, NiftiVolume> _volumes = [];
    private readonly List<string> _warnings = [];
    private readonly List<FilledRegion> _filled = [];
    private readonly long? _budget;
    private long _predicted;

    /// <summary>Fills all regions.</summary>
    /// <param name="reading">The study as read.</param>
    /// <param name="library">Region library.</param>
    /// <param name="sensors">Head and imported points.</param>
    /// <param name="inputs">Receives the files that are read.</param>
    /// <param name="purpose">Assess fills what responses name and checks the rest too.</param>
    /// <param name="settings">Memory budget, cancellation.</param>
    /// <exception cref="InputException">A region cannot be filled, or would not fit the memory budget.</exception>
    public RegionAssembly(StudyReading reading, RegionLibrary library, SensorAssembly sensors, InputDigests inputs, Purpose purpose, RunSettings settings)
    {
        _reading = reading;
        _sensors = sensors;
        _inputs = inputs;
        _budget = settings.MemoryBudget;
        foreach (RegionChoice choice in reading.Study.Regions)
        {
            settings.Cancellation.ThrowIfCancellationRequested();
            Add(Own(choice));
        }

        HashSet<string> named = [.. reading.Study.Regions.Select(r => r.Name)];
        IEnumerable<(string Name, string Key)> competitors = purpose == Purpose.Leadfield ? []
            : reading.Study.Responses.SelectMany(r => r.Competitors.Select((c, k) => (c.Region, $"{r.Key}.competitors[{k}].region")));
        foreach ((string name, string key) in reading.Study.Responses.SelectMany(r => r.Regions.Select(name => (name, r.Key + ".regions"))).Concat(competitors))
        {
            if (named.Add(name))
            {
                settings.Cancellation.ThrowIfCancellationRequested();
                if (sensors.Imported is not null)
                {
                    throw Problem(key, $"region '{name}' is one of the library; with imported leadfields a region selects imported points by name (regions: - {{name: ..., points: ...}})");
                }

                if (name != "cortex" && Misfit(name, key) is { } misfit)
                {
                    _warnings.Add(misfit);
                }

                Add(RegionFill.Fill(library.Get(name, sensors.LibraryScale, sensors.LibraryCentre, key), null, sensors.Head));
            }
        }

        if (purpose == Purpose.Leadfield && _filled.Count == 0)
        {
            throw Problem("regions", "no region is listed and no response names one: there is no point at which a leadfield could be computed");
        }
    }

    /// <summary>The filled regions.</summary>
    public IReadOnlyList<FilledRegion> Filled => _filled;

    /// <summary>What the user must know.</summary>
    public IReadOnlyList<string> Warnings => _warnings;

    private void Add(FilledRegion region)
    {
        _filled.Add(region);
        _predicted += region.Positions.Length * BytesADipole;
        _warnings.AddRange(region.Warnings);
    }

    private FilledRegion Own(RegionChoice choice)
    {
        string file = _reading.Study.File;
        try
        {
            if (choice.Points is { } points)
            {
                return Points(choice, points);
            }

            if (_sensors.Imported is not null)
            {
                throw Problem(choice.Key, $"region '{choice.Name}': with imported leadfields a region selects imported points by name; give `points: FILE`");
            }

            if (choice.Ellipsoid is { } ellipsoid)
            {
                RegionShape shape = new Ellipsoid(ellipsoid).Shape;
                CheckBudget(choice, shape);
                return RegionFill.Fill(choice.Name, shape, choice.Spacing, _sensors.Head, "ellipsoid of the study", file, choice.Key);
            }

            (string path, string display) = _inputs.Use(choice.Mask!);
            if (!_volumes.TryGetValue(display, out NiftiVolume? volume))
            {
                _volumes[display] = volume = NiftiReader.Read(path, display);
                _warnings.AddRange(volume.Warnings);
            }

            (VoxelMask mask, IReadOnlyList<string> warnings) = MaskFile.Select(volume, choice.Label, choice.Threshold);
            _warnings.AddRange(warnings);
            if (RegionSide.Contradiction(choice.Name, mask.Centroid) is { } contradiction)
            {
                _warnings.Add(contradiction);
            }

            var solid = new RegionShape(mask.Contains, mask.WorldBounds.Low, mask.WorldBounds.High, mask.Volume, mask.Centroid);
            CheckBudget(choice, solid);
            return RegionFill.Fill(choice.Name, solid, choice.Spacing, _sensors.Head, $"mask {display}, {mask.Selection}", file, choice.Key);
        }
        catch (InputException error) when (error.Problems.All(p => p.Line == 0))
        {
            // the place in the study, where the problem only shows in a table or volume that the study names
            throw new InputException([.. error.Problems.Select(p => p.File is null || p.File == file
                ? Placed(p.Key ?? choice.Key, p.Message)
                : p with { Key = p.Key ?? choice.Key, Message = p.Message.Contains(choice.Name, StringComparison.Ordinal) ? p.Message : $"{p.Message} (region '{choice.Name}')" })]);
        }
    }

    private FilledRegion Points(RegionChoice choice, string points)
    {
        PointsTable table = _inputs.UseOnce(points, PointsTable.Read);
        string display = points;
        _warnings.AddRange(table.Warnings);
        if (_sensors.Imported is { } imported)
        {
            return Imported(choice, table, imported, display);
        }

        return RegionFill.Points(choice.Name, table.Names, table.Positions, _sensors.Head, $"points {display}", display, choice.Key);
    }

    private static FilledRegion Imported(RegionChoice choice, PointsTable table, ImportedLeadfield imported, string display)
    {
        var kept = new List<(int Row, int Source, TablePoint Point)>();
        var dropped = new List<DroppedPoint>();
        for (int row = 0; row < table.Points.Count; row++)
        {
            TablePoint point = table.Points[row];
            int source = imported.IndexOf(point.Name);
            if (source < 0)
            {
                throw new InputException([new InputProblem(display, point.Line, 0, "name",
                    $"point '{point.Name}' is not among the imported points{NearestName.Hint(point.Name, imported.Points.Select(p => p.Name).Take(5000))}; region '{choice.Name}' selects them by name")]);
            }

            if (imported.Points[source].WhyUnusable is { } why)
            {
                dropped.Add(new DroppedPoint(row, point.Name, imported.Points[source].Position, why));
            }
            else
            {
                kept.Add((row, source, point));
            }
        }

        if (kept.Count == 0)
        {
            throw new InputException(display, choice.Key, $"region '{choice.Name}' keeps no point: {dropped[0].Reason}");
        }

        Vec3[] positions = [.. kept.Select(k => imported.Points[k.Source].Position)];
        return new FilledRegion
        {
            Name = choice.Name,
            Positions = positions,
            Rows = [.. kept.Select(k => k.Row)],
            PointNames = [.. kept.Select(k => k.Point.Name)],
            SourceIndices = [.. kept.Select(k => k.Source)],
            Dropped = dropped,
            Centroid = positions.Aggregate(Vec3.Zero, (sum, p) => sum + p) / positions.Length,
            Origin = $"imported points {display}",
            Warnings = dropped.Count > RegionFill.WarnDroppedShare * table.Points.Count
                ? [string.Create(CultureInfo.InvariantCulture, $"{choice.Name}: {dropped.Count} of its {table.Points.Count} points are unusable")]
                : [],
        };
    }

    private void CheckBudget(RegionChoice choice, RegionShape shape)
    {
        long count = GridSpacing.PredictCount(shape.Volume, choice.Spacing);
        if (_budget is { } budget && (count > long.MaxValue / BytesADipole || _predicted + count * BytesADipole > budget))
        {
            throw Problem(choice.Key + ".spacing_mm", string.Create(CultureInfo.InvariantCulture,
                $"region '{choice.Name}' of {Si.ToMillilitres(shape.Volume):0.###} mL would hold about {count:N0} dipoles, more than the memory budget of {budget / 1e6:N0} MB admits; state a larger spacing_mm or a larger --memory"));
        }
    }

    private string? Misfit(string name, string key)
    {
        try
        {
            return _sensors.LibraryMisfit(name);
        }
        catch (InputException error)
        {
            throw Problem(key, error.Problems[0].Message);
        }
    }

    private InputException Problem(string key, string message) => new([Placed(key, message)]);

    private InputProblem Placed(string key, string message) => _reading.Problem(key, message);
}
