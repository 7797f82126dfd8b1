// Signatures of other layers that this branch programs against. Removed when those layers are merged.
using DeepSourceCheck.Core.Results;

#pragma warning disable IDE0060, IDE0130, CA1822, CA2000
namespace DeepSourceCheck.Report
{
    internal sealed class ResultFolder : IDisposable
    {
        public string Folder => throw StandIn.Absent();

        public static void CheckTarget(string path, ResultFolderKind kind) => throw StandIn.Absent();

        public static ResultFolder Create(string path, ResultFolderKind kind) => throw StandIn.Absent();

        public void Commit() => throw StandIn.Absent();

        public void Dispose()
        {
        }
    }

    internal enum ResultFolderKind
    {
        Assessment,
        Leadfield,
    }

    internal static class ReportWriter
    {
        public const string Dipoles = "dipoles";
        public const string Figures = "figures";
        public const string Report = "report";

        public static int Write(Assessment assessment, string folder, IReadOnlySet<string> without, CancellationToken cancel) => throw StandIn.Absent();
    }

    internal static class StandIn
    {
        public static InvalidOperationException Absent() => new("a layer is not part of this branch");
    }
}

namespace DeepSourceCheck.Report.Tables
{
    internal sealed class DipolesCsv(Stream stream) : IDipoleSink, IDisposable
    {
        public void Dispose() => stream.Dispose();

        public void Begin(IReadOnlyList<DipoleColumn> columns) => throw StandIn.Absent();

        public byte[] Format(DipoleChunk chunk) => throw StandIn.Absent();

        public void Append(byte[] formatted) => throw StandIn.Absent();
    }

    internal static class AssessmentJson
    {
        public static void Write(Assessment assessment, Stream stream) => throw StandIn.Absent();
    }
}

namespace DeepSourceCheck.Report.Console
{
    internal static class ConsoleSummary
    {
        public static string Of(Assessment assessment, string outputPath, bool terminal, bool unicode, bool color, int files, bool report) => throw StandIn.Absent();
    }

    internal static class WhyText
    {
        public static string Of(Assessment assessment, ResponseResult response, RegionResult region, bool unicode) => throw StandIn.Absent();
    }
}

namespace DeepSourceCheck.Files.Studies
{
    internal static class ExampleStudy
    {
        public static string Text => throw Report.StandIn.Absent();
    }
}

namespace DeepSourceCheck.Files.Regions
{
    internal sealed class RegionLibrary
    {
        public IReadOnlyList<Core.Regions.LibraryRegion> Regions => throw Report.StandIn.Absent();

        public static RegionLibrary Load() => throw Report.StandIn.Absent();
    }
}

namespace DeepSourceCheck.Files.Nifti
{
    internal sealed record NiftiVolume(Core.Regions.ValueVolume Volume, IReadOnlyList<string> Warnings);

    internal static class NiftiReader
    {
        public static NiftiVolume Read(string path, string displayName) => throw Report.StandIn.Absent();
    }
}

namespace DeepSourceCheck.Core.Regions
{
    internal sealed record ValueVolume;

    internal sealed record Ellipsoid(Geometry.Vec3 Centre, Geometry.Vec3 SemiAxes, double Volume);

    internal sealed record LibraryRegion(
        string Name, string Structure, string Side, string Frame, Ellipsoid? Shape, string VolumeSource, Studies.Grade VolumeGrade, string PlaceSource, Studies.Grade PlaceGrade,
        string? SphereLimits, string Note);

    internal sealed record LabelEntry(long Label, int Voxels, double Volume, Geometry.Vec3 Centroid, string Side);

    internal sealed record LabelListing(IReadOnlyList<LabelEntry> Entries, IReadOnlyList<string> Warnings)
    {
        public static LabelListing Of(ValueVolume volume) => throw Report.StandIn.Absent();
    }
}
