using DeepSourceCheck.Cli;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Files.Heads;
using DeepSourceCheck.Files.Nifti;

namespace DeepSourceCheck.Examples;

/// <summary>A folder with the invented head at 3 mm, a cache of its own, and each study that stands on it run once.</summary>
public sealed class PhantomFolder : IDisposable
{
    private static readonly Tissue[] Labels =
    [
        new(1, "scalp", TissueKind.Scalp, 0.43), new(2, "compact skull", TissueKind.Skull, 0.008), new(3, "spongy skull", TissueKind.Skull, 0.025),
        new(4, "csf", TissueKind.Csf, 1.79), new(5, "grey", TissueKind.Grey, 0.33), new(6, "white", TissueKind.White, 0.14),
    ];

    private readonly string _folder = Directory.CreateTempSubdirectory("dsc-phantom-").FullName;
    private readonly Dictionary<string, AssessedStudy> _runs = [];

    public PhantomFolder() => Execute("new", Head, "--head", "phantom", "--voxel-mm", "3");

    private string Head => Path.Combine(_folder, "head");

    private string Cache => Path.Combine(_folder, "cache");

    public void Dispose() => Directory.Delete(_folder, recursive: true);

    /// <summary>One of the numbered studies, assessed beside the head.</summary>
    internal AssessedStudy Assessed(string name)
    {
        if (!_runs.TryGetValue(name, out AssessedStudy? run))
        {
            _runs.Add(name, run = AssessedStudy.Run(Beside(name), "--cache", Cache));
        }

        return run;
    }

    /// <summary>What a command prints of one of the numbered studies.</summary>
    internal string Printed(string command, string name, params string[] more) => Execute([command, Beside(name), .. more]);

    /// <summary>Writes a mask on the head's grid.</summary>
    /// <param name="name">Its file.</param>
    /// <param name="within">Which voxels, by centre [m] and tissue.</param>
    public void Mask(string name, Func<Vec3, TissueKind, bool> within)
    {
        string file = Path.Combine(Head, "phantom-head.nii.gz");
        (TissueVolume volume, _) = TissueVolumeReader.Read(file, file, Labels);
        var mask = new byte[volume.Grid.Count];
        for (int at = 0; at < mask.Length; at++)
        {
            (int i, int j, int k) = volume.Grid.Voxel(at);
            mask[at] = within(volume.Grid.Centre(i, j, k), volume.Tissues[volume.Cells[at]].Kind) ? (byte)1 : (byte)0;
        }

        NiftiWriter.Write<byte>(Path.Combine(Head, name), volume.Grid, mask);
    }

    private string Beside(string name)
    {
        string copy = Path.Combine(Head, name);
        File.Copy(SourceTree.Study(name), copy, overwrite: true);
        return copy;
    }

    private static string Execute(params string[] arguments)
    {
        using var output = new StringWriter { NewLine = "\n" };
        using var error = new StringWriter { NewLine = "\n" };
        int status = CommandLine.Run(arguments, new Surroundings { Out = output, Error = error });
        Assert.True(status == ExitStatus.Done, $"status {status}: {error}");
        return output.ToString();
    }
}
