using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Regions;

/// <summary>The built-in region library: every structure under `regions/`, each side under its own name.</summary>
public sealed class RegionLibrary
{
    private const string Prefix = "regions/";

    // Structures by the names of their regions, and what was read of them: a study names a few of the files, and parsing all of them takes longer than checking it.
    private readonly Dictionary<string, string> _resources;
    private readonly Dictionary<string, IReadOnlyList<LibraryRegion>> _read = new(StringComparer.Ordinal);
    private readonly string[] _names;
    private readonly Lazy<RealisticHeadTable> _realistic = new(RealisticHeadTable.Load);

    private RegionLibrary(Dictionary<string, string> resources, string[] names) => (_resources, _names) = (resources, names);

    /// <summary>All regions, sides next to each other, in the order of structures.</summary>
    /// <exception cref="InvalidDataException">A resource is malformed: a fault of the build.</exception>
    public IReadOnlyList<LibraryRegion> Regions => Array.ConvertAll(_names, name => Find(name)!);

    /// <summary>Names by which studies use them.</summary>
    public IReadOnlyList<string> Names => _names;

    /// <summary>Opens the library that travels inside the program; each structure is read when it is first asked for.</summary>
    public static RegionLibrary Load()
    {
        string[] resources = Array.FindAll(typeof(RegionLibrary).Assembly.GetManifestResourceNames(), n => n.StartsWith(Prefix, StringComparison.Ordinal));
        Array.Sort(resources, StringComparer.Ordinal);
        Dictionary<string, string> byName = new(StringComparer.Ordinal);
        List<string> names = [];
        foreach (string resource in resources)
        {
            foreach (string name in LibraryRegionReader.Names(Text(resource)))
            {
                byName.Add(name, resource);
                names.Add(name);
            }
        }

        return new(byName, [.. names]);
    }

    /// <summary>The region of a name, or null.</summary>
    /// <exception cref="InvalidDataException">Its resource is malformed: a fault of the build.</exception>
    public LibraryRegion? Find(string name)
    {
        if (!_resources.TryGetValue(name, out string? resource))
        {
            return null;
        }

        lock (_read)
        {
            if (!_read.TryGetValue(resource, out IReadOnlyList<LibraryRegion>? regions))
            {
                using StringReader text = new(Text(resource));
                _read[resource] = regions =
                    [.. LibraryRegionReader.Read(resource, text).Select(r => r with { RealisticHead = _realistic.Value.Find(r.Name, r.Structure, r.Side) })];
            }

            foreach (LibraryRegion region in regions)
            {
                if (region.Name == name)
                {
                    return region;
                }
            }

            throw new InvalidDataException($"{resource}: {name} is not among its regions");
        }
    }

    /// <summary>The region of a name, scaled about the head's centre.</summary>
    /// <param name="name">For instance `thalamus-left`.</param>
    /// <param name="factor">1 for adults; child and neonate heads scale (see <see cref="SphereHeadChoice.LibraryScale"/>).</param>
    /// <param name="about">Centre of the head [m].</param>
    /// <param name="key">Key of the study that names it, for the message.</param>
    /// <exception cref="InputException">There is no such region; names the nearest.</exception>
    public LibraryRegion Get(string name, double factor, Vec3 about, string? key = null)
    {
        if (Find(name) is { } region)
        {
            return region.Scaled(factor, about);
        }

        string side = Find(name + "-left") is not null ? $"; it has two sides: write {name}-left or {name}-right" : NearestName.Hint(name, Names);
        throw new InputException(null, key, $"there is no region '{name}' in the library or the study{side}");
    }

    private static string Text(string resource)
    {
        using Stream stream = typeof(RegionLibrary).Assembly.GetManifestResourceStream(resource)!;
        using StreamReader reader = new(stream);
        return reader.ReadToEnd();
    }
}
