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
        public static void Write(Assessment assessment, string folder, IReadOnlySet<string> without) => throw StandIn.Absent();
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
        public static string Format(Assessment assessment, string outputPath, bool terminal, bool unicode, bool color) => throw StandIn.Absent();
    }

    internal static class WhyText
    {
        public static string Format(ResponseResult response, RegionResult region, bool unicode) => throw StandIn.Absent();
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
    internal sealed record LibraryRegion(string Name, string Frame, Core.Geometry.Vec3 Centre, double Volume, string Source, Core.Studies.Grade Grade);

    internal static class RegionLibrary
    {
        public static IReadOnlyList<LibraryRegion> All => throw Report.StandIn.Absent();
    }
}

namespace DeepSourceCheck.Files.Nifti
{
    internal sealed record LabelVolume(IReadOnlyList<string> Warnings);

    internal static class NiftiReader
    {
        public static LabelVolume Read(string path) => throw Report.StandIn.Absent();
    }
}

namespace DeepSourceCheck.Core.Regions
{
    internal sealed record LabelEntry(double Label, long Voxels, double Volume, Geometry.Vec3 Centroid, string Side);

    internal static class LabelListing
    {
        public static IReadOnlyList<LabelEntry> Of(Files.Nifti.LabelVolume volume) => throw Report.StandIn.Absent();
    }
}
