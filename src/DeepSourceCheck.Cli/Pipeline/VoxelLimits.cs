using System.Globalization;

using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>What a head of voxels leaves out, in words.</summary>
internal static class VoxelLimits
{
    /// <summary>The sentences.</summary>
    /// <param name="volume">Head.</param>
    /// <param name="choice">What the study says of it.</param>
    public static IEnumerable<string> Of(TissueVolume volume, VoxelHeadChoice choice)
    {
        double edge = Math.Cbrt(volume.Grid.VoxelVolume);
        yield return string.Create(CultureInfo.InvariantCulture,
            $"The head is made of voxels, here of {Si.ToMm(edge):0.##} mm, and finite elements on them err. On a layered sphere with 2 mm of fluid, whose potentials are known, EEG came out too large by 4 to 6 % at 1 mm, 7 to 11 % at 2 mm and 28 to 50 % at 4 mm; MEG of deep sources errs by less than 1 % at 2 mm. Layers thinner than two voxels carry most of it: halve the voxels where a decision hangs on it.");
        yield return "Only what the labels show is in the model. Errors of the segmentation, the thickness of the skull above all, are in no range that is given here, and neither are vessels, dura and fat that have no label.";
        string tissues = string.Join(", ", volume.Tissues.Where(t => t.Conductivity > 0).Select(t => string.Create(CultureInfo.InvariantCulture, $"{t.Name} {t.Conductivity:0.####}")));
        yield return $"Conductivities are assumed, not measured in this person ({tissues} S/m{(choice.Tensors is null ? "" : "; tensors for " + string.Join(", ", choice.Tensors.Tissues))}). The skull's differs most between people, and EEG follows it; a variant with another value shows by how much.";
        yield return "Leaks and thin parts of the skull, landmarks that were found rather than given, and electrodes that were moved to the scalp stand among the warnings of this run, with places and distances; what is not named there was not found.";
        yield return "The outward direction is that of the inner skull as the point sees it. A deep source may lie nearer to the base of the skull than to its vault: angles to the outward direction then refer to the base.";
    }
}
