using System.Text;
using System.Text.Json;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Report.Tables;

namespace DeepSourceCheck.Cli.Output;

/// <summary>Writes the machine-readable result of a command: indented JSON, round-trip numbers, a line feed at the end.</summary>
internal static class JsonOutput
{
    /// <summary>Writes one JSON object.</summary>
    /// <param name="to">Standard output.</param>
    /// <param name="members">Writes the object's members.</param>
    public static void Object(TextWriter to, Action<Utf8JsonWriter> members)
    {
        using var bytes = new MemoryStream();
        using (var json = new Utf8JsonWriter(bytes, JsonText.Options))
        {
            json.WriteStartObject();
            json.WriteProgram(CommandLine.Version);
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
}
