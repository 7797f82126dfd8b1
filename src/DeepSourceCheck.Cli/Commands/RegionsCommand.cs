using System.CommandLine;
using System.Globalization;
using System.Text.Json;

using DeepSourceCheck.Cli.Output;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Files.Nifti;
using DeepSourceCheck.Files.Regions;
using DeepSourceCheck.Report.Answers;
using DeepSourceCheck.Report.Console;
using DeepSourceCheck.Report.Tables;

namespace DeepSourceCheck.Cli.Commands;

/// <summary>`regions`: the region library, or what a label volume holds.</summary>
internal static class RegionsCommand
{
    public static Command Create(Surroundings surroundings)
    {
        var mask = new Option<string?>("--mask")
        {
            Description = "List what this NIfTI label volume holds (.nii, .nii.gz, .hdr/.img) instead of the library.",
            HelpName = "FILE",
        };
        Option<bool> json = SharedOptions.Json();
        var command = new TaughtCommand("regions", "list the region library, or the labels of a NIfTI volume")
        {
            About =
            [
                "Without options: every region that a study may name without further ado, with its volume, centre, frame and source. A study may add its own regions: ellipsoids, masks, points.",
                "With --mask: voxels, volume, centroid and side of each label. Look at the side: there are volumes whose labels sit on the other side than their names say.",
            ],
            Examples =
            [
                new("deepsourcecheck regions", "The library."),
                new("deepsourcecheck regions --mask atlas.nii.gz", "Which label is which, before a study names one."),
            ],
        };
        command.Add(mask);
        command.Add(json);
        command.SetAction(parsed => parsed.GetValue(mask) is { } file
            ? ListMask(file, parsed.GetValue(json), surroundings)
            : ListLibrary(parsed.GetValue(json), surroundings));
        return command;
    }

    private static int ListLibrary(bool json, Surroundings surroundings)
    {
        IReadOnlyList<LibraryRegion> library = RegionLibrary.Load().Regions;
        if (json)
        {
            JsonOutput.Object(surroundings.Out, writer =>
            {
                writer.WriteStartArray("regions");
                foreach (LibraryRegion region in library)
                {
                    Write(writer, region);
                }

                writer.WriteEndArray();
            });
            return ExitStatus.Done;
        }

        surroundings.Out.WriteLine($"{"region",-38}{"mL",8}  {"published mL",-14}centre, mm");
        foreach (LibraryRegion region in library)
        {
            string volume = region.Shape is { } shape ? Si.ToMillilitres(shape.Volume).ToString("0.000", CultureInfo.InvariantCulture) : "-";
            string published = region.VolumeRange is (var low, var high) ? string.Create(CultureInfo.InvariantCulture, $"{Si.ToMillilitres(low):0.###} to {Si.ToMillilitres(high):0.###}") : "-";
            string centre = region.Shape is { } placed ? Millimetres(placed.Centre, "0.#") : "-";
            surroundings.Out.WriteLine($"{region.Name,-38}{volume,8}  {published,-14}{centre}");
        }

        surroundings.Out.WriteLine();
        foreach (string frame in library.Select(r => r.Frame).Distinct())
        {
            surroundings.Out.Write(WhyText.Wrap("Frame: " + frame, 0));
        }

        surroundings.Out.WriteLine("\nSources of the volumes (grade)");
        foreach (LibraryRegion region in library.DistinctBy(r => r.Structure))
        {
            surroundings.Out.Write(WhyText.Wrap($"{region.Structure}: {region.VolumeSource} ({Names.Of(region.VolumeGrade)})", 2));
        }

        surroundings.Out.WriteLine("\nOn spherical heads");
        foreach (string limits in WarningText.Grouped(library.Where(r => r.SphereLimits is not null).DistinctBy(r => r.Structure).Select(r => $"{r.Structure}: {r.SphereLimits}")))
        {
            surroundings.Out.Write(WhyText.Wrap(limits, 2));
        }

        return ExitStatus.Done;
    }

    private static void Write(Utf8JsonWriter writer, LibraryRegion region)
    {
        writer.WriteStartObject();
        writer.WriteString("name", region.Name);
        writer.WriteString("side", region.Side);
        writer.WriteString("frame", region.Frame);
        if (region.Shape is { } shape)
        {
            writer.Point("centre_mm", shape.Centre);
            writer.Point("semi_axes_mm", shape.SemiAxes);
        }

        writer.WriteFigure("volume_mL", region.Shape is { } whole ? Si.ToMillilitres(whole.Volume) : null);
        writer.WriteString("volume_source", region.VolumeSource);
        writer.WriteString("volume_grade", Names.Of(region.VolumeGrade));
        writer.WriteString("place_source", region.PlaceSource);
        writer.WriteString("place_grade", Names.Of(region.PlaceGrade));
        writer.WriteString("sphere_limits", region.SphereLimits);
        writer.WriteString("note", region.Note);
        writer.WriteEndObject();
    }

    private static int ListMask(string file, bool json, Surroundings surroundings)
    {
        surroundings.Interruption.Token.ThrowIfCancellationRequested();
        NiftiVolume volume = NiftiReader.Read(file, file);
        var listing = LabelListing.Of(volume.Volume);
        string[] warnings = [.. volume.Warnings, .. listing.Warnings];
        if (json)
        {
            JsonOutput.Object(surroundings.Out, writer =>
            {
                writer.WriteStartArray("labels");
                foreach (LabelEntry label in listing.Entries)
                {
                    writer.WriteStartObject();
                    writer.WriteNumber("label", label.Label);
                    writer.WriteNumber("voxels", label.Voxels);
                    writer.WriteFigure("volume_mL", Si.ToMillilitres(label.Volume));
                    writer.Point("centroid_mm", label.Centroid);
                    writer.WriteString("side", label.Side);
                    writer.WriteEndObject();
                }

                writer.WriteEndArray();
                writer.WriteStrings("warnings", warnings);
            });
            return ExitStatus.Done;
        }

        surroundings.Warn(warnings);
        surroundings.Out.WriteLine($"{"label",10}{"voxels",12}{"mL",12}  {"centroid, mm",-26}side");
        foreach (LabelEntry label in listing.Entries)
        {
            surroundings.Out.WriteLine(string.Create(CultureInfo.InvariantCulture,
                $"{label.Label,10}{label.Voxels,12:#,0}{Si.ToMillilitres(label.Volume),12:0.000}  {Millimetres(label.Centroid, "0.0"),-26}{label.Side}"));
        }

        return ExitStatus.Done;
    }

    private static string Millimetres(Vec3 point, string format) =>
        string.Join(", ", Enumerable.Range(0, 3).Select(axis => Si.ToMm(point[axis]).ToString(format, CultureInfo.InvariantCulture)));
}
