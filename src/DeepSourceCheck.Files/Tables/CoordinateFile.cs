using System.Text.Json;

using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Tables;

/// <summary>coordsystem.json of the BIDS standard: the unit and the name of the electrodes' coordinate system.</summary>
/// <param name="Unit">`m`, `cm` or `mm`.</param>
/// <param name="System">EEGCoordinateSystem as stated, or null.</param>
/// <param name="Warnings">What the user must know.</param>
internal sealed record CoordinateFile(string Unit, string? System, IReadOnlyList<string> Warnings)
{
    private const string UnitKey = "EEGCoordinateUnits";
    private const string SystemKey = "EEGCoordinateSystem";
    private const long LargestFile = 1 << 22;

    /// <exception cref="InputException">No JSON object, or no usable unit.</exception>
    public static CoordinateFile Read(string path, string displayName)
    {
        string text = Utf8Text.Decode(InputFileAccess.ReadAll(path, displayName, LargestFile), displayName);
        try
        {
            using JsonDocument document = JsonDocument.Parse(text);
            return Interpret(document.RootElement, displayName);
        }
        catch (JsonException error)
        {
            int line = (int)Math.Min((error.LineNumber ?? 0) + 1, int.MaxValue), column = (int)Math.Min((error.BytePositionInLine ?? 0) + 1, int.MaxValue);
            throw new InputException([new InputProblem(displayName, line, column, null, "this is not valid JSON; an object with EEGCoordinateUnits is expected")]);
        }
    }

    private static CoordinateFile Interpret(JsonElement root, string displayName)
    {
        string? unit = Text(root, UnitKey, displayName);
        if (unit is null)
        {
            throw new InputException(displayName, UnitKey, "the key is missing; state the electrodes' unit: m, cm or mm");
        }

        if (unit is not ("m" or "cm" or "mm"))
        {
            throw new InputException(displayName, UnitKey, $"the unit {Shown.Quoted(unit)} is not a length that is read; m, cm or mm is expected");
        }

        string? system = Text(root, SystemKey, displayName);
        bool known = system is null or "Other" || system.StartsWith("MNI", StringComparison.Ordinal) || system.StartsWith("ICBM", StringComparison.Ordinal);
        return new(unit, system, known ? [] :
            [$"{displayName}: the electrodes are in the coordinate system {Shown.Quoted(system!)} and are used as they stand: the regions' frame has x to the right, y to the front, z up; check that theirs is the same"]);
    }

    private static string? Text(JsonElement root, string key, string displayName)
    {
        if (root.ValueKind != JsonValueKind.Object)
        {
            throw new InputException(displayName, null, "the file holds no JSON object; one with EEGCoordinateUnits is expected");
        }

        if (!root.TryGetProperty(key, out JsonElement value))
        {
            return null;
        }

        try
        {
            return value.ValueKind == JsonValueKind.String ? value.GetString() : throw new InputException(displayName, key, "a text in quotes is expected");
        }
        catch (InvalidOperationException)
        {
            // Half of a surrogate pair, written as an escape.
            throw new InputException(displayName, key, "the text holds an invalid character");
        }
    }
}
