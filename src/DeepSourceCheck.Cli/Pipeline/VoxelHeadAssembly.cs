using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Files.Heads;
using DeepSourceCheck.Files.Nifti;
using DeepSourceCheck.Files.Studies;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>A head of voxels as its files give it.</summary>
/// <param name="Head">The head.</param>
/// <param name="AsInFile">Its volume without the margin that was made up where the file cuts the head.</param>
/// <param name="Tensors">Conductivity tensors, or null.</param>
internal sealed record BuiltVoxelHead(VoxelHead Head, TissueVolume AsInFile, ConductivityTensors? Tensors);

/// <summary>Reads and checks a head of voxels: labels, overlays in order, cut, pieces, checks, tensors.</summary>
internal static class VoxelHeadAssembly
{
    private const string LabelsKey = "head.voxels.labels", TensorsKey = "head.voxels.tensors.file";

    // Radius of the sphere of a head's volume [mm]: the contract's range of head radii.
    private const double SmallestRadius = 45, LargestRadius = 110;

    /// <summary>Builds the head.</summary>
    /// <param name="reading">The study as read.</param>
    /// <param name="choice">Its head.</param>
    /// <param name="inputs">Receives the files that are read.</param>
    /// <param name="settings">Memory budget, cancellation.</param>
    /// <param name="warnings">Receives what the user must know.</param>
    /// <exception cref="InputException">A file is wrong, the head cannot be computed with, or it does not fit into the budget.</exception>
    public static BuiltVoxelHead Build(StudyReading reading, VoxelHeadChoice choice, InputDigests inputs, RunSettings settings, List<string> warnings)
    {
        (string path, string display) = inputs.Use(choice.Labels);
        RefuseOverBudget(NiftiReader.ReadHeader(path, display), display, settings.MemoryBudget);
        (TissueVolume volume, IReadOnlyList<string> said) = TissueVolumeReader.Read(path, display, choice.Tissues);
        warnings.AddRange(said);
        VoxelGrid grid = volume.Grid;
        foreach (OverlayChoice overlay in choice.Overlays)
        {
            settings.Cancellation.ThrowIfCancellationRequested();
            (string mask, string name) = inputs.Use(overlay.Mask);
            (volume, said) = TissueOverlay.Apply(volume, mask, name, overlay.Tissue, overlay.Key);
            warnings.AddRange(said);
        }

        CroppedHead cropped = HeadCrop.Of(volume) ?? throw new InputException(display, LabelsKey, "the overlays turn every voxel of the head into air");
        settings.Cancellation.ThrowIfCancellationRequested();
        RefuseOverBudget(cropped.Volume, display, settings.MemoryBudget);
        HeadPieces pieces = HeadPieces.Largest(cropped.Volume);
        HeadFindings findings = HeadChecks.Judge(cropped, pieces);
        if (findings.Problems.Count > 0)
        {
            throw new InputException([.. findings.Problems.Select(p => new InputProblem(display, 0, 0, LabelsKey, p))]);
        }

        warnings.AddRange(findings.Warnings.Select(w => $"{display}: {w}"));
        JudgeSize(reading, pieces.Volume, warnings);
        settings.Cancellation.ThrowIfCancellationRequested();
        return new(
            new($"voxels: {display}", pieces.Volume, cropped.Touched),
            HeadCrop.AsInFile(pieces.Volume, cropped.Touched),
            choice.Tensors is null ? null : Tensors(reading, choice, grid, pieces.Volume, inputs, warnings));
    }

    private static void RefuseOverBudget(NiftiHeader header, string display, long? budget)
    {
        long bytes = TissueVolumeReader.Bytes(header);
        if (budget is { } limit && bytes > limit)
        {
            throw new InputException(display, LabelsKey,
                $"{header.Grid.Nx} x {header.Grid.Ny} x {header.Grid.Nz} voxels take about {MemorySize.Rough(bytes)} to read alone, more than the {MemorySize.Rough(limit)} that --memory allows; cut the volume to the head, use larger voxels, or allow more");
        }
    }

    /// <summary>What the fewest sensors would take is known before the head is looked at: a hopeless run is refused at once.</summary>
    private static void RefuseOverBudget(TissueVolume volume, string display, long? budget)
    {
        if (budget is { } limit && new VoxelCost(volume).Of(rows: 1, dipoles: 1, reusable: false).Bytes is var bytes && bytes > limit)
        {
            throw new InputException(display, LabelsKey,
                $"the finite elements on it need at least {MemorySize.Rough(bytes)} of memory, more than the {MemorySize.Rough(limit)} that --memory allows; use larger voxels, or allow more");
        }
    }

    private static void JudgeSize(StudyReading reading, TissueVolume volume, List<string> warnings)
    {
        double radius = Math.Round(Si.ToMm(HeadChecks.Radius(volume)), 1);
        Judge(reading, LabelsKey, radius, SmallestRadius, LargestRadius, "mm", "the radius of a sphere of the head's volume,", warnings);
    }

    private static ConductivityTensors Tensors(StudyReading reading, VoxelHeadChoice choice, VoxelGrid grid, TissueVolume volume, InputDigests inputs, List<string> warnings)
    {
        (string path, string display) = inputs.Use(choice.Tensors!.File);
        TensorReading tensors = TensorVolumeReader.Read(path, display, grid, volume, choice.Tensors.Tissues);
        warnings.AddRange(tensors.Warnings);
        foreach ((string name, double mean) in tensors.Means.OrderBy(m => m.Key, StringComparer.Ordinal))
        {
            // Tensors of diffusion (mm^2/s, some 0.0007) are mistaken for conductivities most often.
            double usual = choice.Tissues.First(t => t.Name == name).Conductivity;
            double rounded = double.Parse(mean.ToString("G3", System.Globalization.CultureInfo.InvariantCulture), System.Globalization.CultureInfo.InvariantCulture);
            Judge(reading, TensorsKey, rounded, usual, usual, "S/m", $"the mean over directions and voxels of {name}, against the tissue's own conductivity,", warnings);
        }

        return tensors.Tensors;
    }

    private static void Judge(StudyReading reading, string key, double value, double low, double high, string unit, string what, List<string> warnings)
    {
        PlausibilityJudgement judgement = Plausibility.Judge(key, value, low, high, unit, reading.Study.AcceptImplausible, what);
        switch (judgement.Is)
        {
            case Plausible.Problem:
                throw new InputException([reading.Problem(key, judgement.Text)]);
            case Plausible.Warning:
                warnings.Add($"{key}: {judgement.Text}");
                break;
        }
    }
}
