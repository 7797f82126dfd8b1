using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Nifti;

/// <summary>A file's path and the name under which the user knows it.</summary>
internal readonly record struct NamedFile(string Path, string Display)
{
    /// <summary>This file with another extension (after taking off .gz), in the letter case of its own; null unless it ends in <paramref name="from"/>.</summary>
    public NamedFile? With(string from, string to)
    {
        int zip = Path.EndsWith(".gz", StringComparison.OrdinalIgnoreCase) ? 3 : 0;
        string stem = Path[..^zip];
        if (!stem.EndsWith(from, StringComparison.OrdinalIgnoreCase))
        {
            return null;
        }

        string extension = stem.EndsWith(from.ToUpperInvariant(), StringComparison.Ordinal) ? to.ToUpperInvariant() : to;
        int cut = zip + from.Length;
        return new(Path[..^cut] + extension, Display.Length > cut ? Display[..^cut] + extension : Display);
    }
}

/// <summary>Which files belong to a name: one .nii, or the .hdr and .img of a pair, each perhaps with .gz.</summary>
internal static class NiftiFileNames
{
    /// <summary>The file that holds the header: the given one, or the .hdr beside a given .img.</summary>
    /// <exception cref="InputException">A .img without its .hdr.</exception>
    public static NamedFile Header(string path, string displayName)
    {
        NamedFile given = new(path, displayName);
        if (!File.Exists(path) || given.With(".img", ".hdr") is not { } header)
        {
            return given;
        }

        return Existing(header) ?? throw new InputException(displayName, null, $"this is the data file of a pair, and its header {header.Display} (or .gz) is not beside it");
    }

    /// <summary>The file that holds the data of a pair.</summary>
    /// <exception cref="InputException">It is not beside the header.</exception>
    public static NamedFile Data(NamedFile header)
    {
        NamedFile data = header.With(".hdr", ".img") ?? header.With(".nii", ".img") ?? new(header.Path + ".img", header.Display + ".img");
        return Existing(data) ?? throw new InputException(header.Display, "magic", $"the header says that the data are in a file of their own, but {data.Display} (or .gz) is not beside it");
    }

    private static NamedFile? Existing(NamedFile file)
    {
        NamedFile zipped = new(file.Path + ".gz", file.Display + ".gz");
        return File.Exists(file.Path) ? file : File.Exists(zipped.Path) ? zipped : null;
    }
}
