namespace DeepSourceCheck.Tests.Support;

/// <summary>The label volumes of the Debian package mricron-data.</summary>
internal static class Atlas
{
    /// <summary>Folder of the package's volumes.</summary>
    public const string Folder = "/usr/share/mricron/templates";

    /// <summary>Why tests against the volumes are skipped, or null.</summary>
    public static string? WhySkipped { get; } = File.Exists(Path.Combine(Folder, "aal.nii.gz")) && File.Exists(Path.Combine(Folder, "jhu189.nii.gz"))
        ? null
        : $"needs the label volumes of the Debian package mricron-data in {Folder}, which is not installed here";
}

/// <summary>A test against atlas volumes; skipped with the reason where they are not installed.</summary>
[AttributeUsage(AttributeTargets.Method)]
internal sealed class AtlasTheoryAttribute : TheoryAttribute
{
    public AtlasTheoryAttribute() => Skip = Atlas.WhySkipped;
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

/// <summary>A test on the labelled volume of a real head; skipped with the reason where it does not stand beside the checkout.</summary>
[AttributeUsage(AttributeTargets.Method)]
internal sealed class RealVolumeFactAttribute : FactAttribute
{
    public RealVolumeFactAttribute()
    {
        string[] absent = [.. new[] { "head_2mm.nii.gz", "landmarks.json", "tenTwenty.json" }.Where(file => LabelledHeads.RealHead(file) is null)];
        if (absent.Length > 0)
        {
            Skip = $"needs shared/reference/head/{absent[0]} beside the checkout (a labelled real head with landmarks and sites), which is not here";
        }
    }
}
