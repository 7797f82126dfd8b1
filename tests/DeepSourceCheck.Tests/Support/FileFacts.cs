namespace DeepSourceCheck.Tests.Support;

/// <summary>A test against the label volumes of the Debian package mricron-data; skipped with the reason where it is not installed.</summary>
[AttributeUsage(AttributeTargets.Method)]
internal sealed class AtlasFactAttribute : FactAttribute
{
    /// <summary>Folder of the package's volumes.</summary>
    public const string Folder = "/usr/share/mricron/templates";

    public AtlasFactAttribute()
    {
        if (!File.Exists(Path.Combine(Folder, "aal.nii.gz")))
        {
            Skip = $"needs {Folder}/aal.nii.gz of the Debian package mricron-data, which is not installed here";
        }
    }
}

/// <summary>A test against the sites found on a real head; skipped with the reason where that file does not stand beside the checkout.</summary>
[AttributeUsage(AttributeTargets.Method)]
internal sealed class RealHeadFactAttribute : FactAttribute
{
    private const string Name = "shared/reference/head/tenTwenty.json";

    public RealHeadFactAttribute()
    {
        if (Sites is null)
        {
            Skip = $"needs {Name} beside the checkout (sites found by geometry on a real head in MNI space), which is not here";
        }
    }

    /// <summary>Path of the file, or null: in any folder above the test's output.</summary>
    public static string? Sites { get; } = Find();

    private static string? Find()
    {
        for (DirectoryInfo? folder = new(AppContext.BaseDirectory); folder is not null; folder = folder.Parent)
        {
            string file = Path.Combine(folder.FullName, Name);
            if (File.Exists(file))
            {
                return file;
            }
        }

        return null;
    }
}
