using System.Text;
using System.Text.Encodings.Web;
using System.Text.Json;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Cli.Output;

/// <summary>Writes the machine-readable result of a command: indented JSON, round-trip numbers, a line feed at the end.</summary>
internal static class JsonOutput
{
    private static readonly JsonWriterOptions Options = new() { Indented = true, NewLine = "\n", Encoder = JavaScriptEncoder.UnsafeRelaxedJsonEscaping };

    /// <summary>Writes one JSON object.</summary>
    /// <param name="to">Standard output.</param>
    /// <param name="members">Writes the object's members.</param>
    public static void Object(TextWriter to, Action<Utf8JsonWriter> members)
    {
        using var bytes = new MemoryStream();
        using (var json = new Utf8JsonWriter(bytes, Options))
        {
            json.WriteStartObject();
            json.WriteStartObject("program");
            json.WriteString("name", "DeepSourceCheck");
            json.WriteString("version", CommandLine.Version);
            json.WriteEndObject();
            members(json);
            json.WriteEndObject();
        }

        Bytes(to, bytes);
    }

    /// <summary>Copies UTF-8 text that was written elsewhere.</summary>
    public static void Bytes(TextWriter to, MemoryStream utf8)
    {
        string text = Encoding.UTF8.GetString(utf8.GetBuffer(), 0, (int)utf8.Length).TrimEnd();
        to.Write(text);
        to.Write('\n');
    }

    /// <summary>Writes a list of texts.</summary>
    public static void Strings(this Utf8JsonWriter json, string name, IEnumerable<string> values)
    {
        json.WriteStartArray(name);
        foreach (string value in values)
        {
            json.WriteStringValue(value);
        }

        json.WriteEndArray();
    }

    /// <summary>Writes a point [m] in mm.</summary>
    public static void Point(this Utf8JsonWriter json, string name, Vec3 point)
    {
        json.WriteStartArray(name);
        for (int axis = 0; axis < 3; axis++)
        {
            json.WriteNumberValue(Si.ToMm(point[axis]));
        }

        json.WriteEndArray();
    }

    /// <summary>Writes a number, or null where it is none.</summary>
    public static void Number(this Utf8JsonWriter json, string name, double? value)
    {
        if (value is { } number && double.IsFinite(number))
        {
            json.WriteNumber(name, number);
        }
        else
        {
            json.WriteNull(name);
        }
    }
}
