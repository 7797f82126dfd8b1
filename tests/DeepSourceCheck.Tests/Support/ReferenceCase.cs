using System.Text.Json;

namespace DeepSourceCheck.Tests.Support;

/// <summary>The reference cases that travel with the tests; each carries its provenance in its own text.</summary>
internal static class ReferenceCase
{
    /// <summary>Folder of the reference cases in the test's output.</summary>
    public static string Folder { get; } = Path.Combine(AppContext.BaseDirectory, "ReferenceCases");

    /// <summary>The case whose file name starts with <paramref name="number"/>.</summary>
    public static JsonElement Sphere(string number)
    {
        string file = Directory.GetFiles(Path.Combine(Folder, "spheres"), number + "_*.json").Single();
        using JsonDocument document = JsonDocument.Parse(File.ReadAllText(file));
        return document.RootElement.Clone();
    }

    /// <summary>A list of numbers.</summary>
    public static double[] Numbers(this JsonElement element) => [.. element.EnumerateArray().Select(e => e.GetDouble())];

    /// <summary>A nested list of numbers, in order.</summary>
    public static double[] Flat(this JsonElement element) =>
        element.ValueKind == JsonValueKind.Number ? [element.GetDouble()] : [.. element.EnumerateArray().SelectMany(Flat)];
}
