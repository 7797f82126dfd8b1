using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Regions;

/// <summary>The built-in region library: every structure under `regions/`, each side under its own name.</summary>
public sealed class RegionLibrary
{
    private const string Prefix = "regions/";

    private readonly Dictionary<string, LibraryRegion> _byName;

    private RegionLibrary(IReadOnlyList<LibraryRegion> regions)
    {
        Regions = regions;
        _byName = regions.ToDictionary(region => region.Name, StringComparer.Ordinal);
    }

    /// <summary>All regions, sides next to each other, in the order of structures.</summary>
    public IReadOnlyList<LibraryRegion> Regions { get; }

    /// <summary>Names by which studies use them.</summary>
    public IEnumerable<string> Names => Regions.Select(region => region.Name);

    /// <summary>Reads the library that travels inside the program.</summary>
    /// <exception cref="InvalidDataException">A resource is malformed: a fault of the build.</exception>
    public static RegionLibrary Load()
    {
        System.Reflection.Assembly assembly = typeof(RegionLibrary).Assembly;
        List<LibraryRegion> regions = [];
        foreach (string resource in assembly.GetManifestResourceNames().Where(n => n.StartsWith(Prefix, StringComparison.Ordinal)).Order(StringComparer.Ordinal))
        {
            using Stream stream = assembly.GetManifestResourceStream(resource)!;
            using StreamReader reader = new(stream);
            regions.AddRange(LibraryRegionReader.Read(resource, reader));
        }

        return new(regions);
    }

    /// <summary>The region of a name, or null.</summary>
    public LibraryRegion? Find(string name) => _byName.GetValueOrDefault(name);

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
}
