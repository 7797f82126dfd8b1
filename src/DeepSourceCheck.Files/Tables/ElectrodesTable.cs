using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Tables;

/// <summary>electrodes.tsv of the BIDS standard, with the unit from coordsystem.json; without that file, millimetres.</summary>
/// <param name="Electrodes">Name and place [m], in the order of the file, at least one.</param>
/// <param name="Unit">Unit of the file: `m`, `cm` or `mm`.</param>
/// <param name="CoordinateSystem">What coordsystem.json calls its system; null without that file.</param>
/// <param name="Warnings">What the user must know, the unit among it where it was assumed.</param>
public sealed record ElectrodesTable(
    IReadOnlyList<(string Name, Vec3 Position)> Electrodes, string Unit, string? CoordinateSystem, IReadOnlyList<string> Warnings)
{
    private static readonly string[] Axes = ["x", "y", "z"];

    /// <summary>Reads the table and, where there is one, its coordinate file.</summary>
    /// <param name="path">electrodes.tsv.</param>
    /// <param name="displayName">As the user named it.</param>
    /// <param name="coordinatesPath">coordsystem.json, or null.</param>
    /// <param name="coordinatesDisplayName">As the user named it.</param>
    /// <exception cref="InputException">Every problem of the file at once, with lines and columns.</exception>
    public static ElectrodesTable Read(string path, string displayName, string? coordinatesPath = null, string? coordinatesDisplayName = null)
    {
        CoordinateFile? coordinates = coordinatesPath is null ? null : CoordinateFile.Read(coordinatesPath, coordinatesDisplayName ?? coordinatesPath);
        string unit = coordinates?.Unit ?? "mm";
        double perMetre = unit switch { "m" => 1, "cm" => 100, _ => 1000 };
        TsvTable table = TsvTable.Read(path, displayName, "name", "x", "y", "z");
        Dictionary<string, int> seen = new(StringComparer.Ordinal);
        List<(string, Vec3)> electrodes = [];
        foreach (TsvRow row in table.Rows)
        {
            string name = table.Name(row, "name", seen);
            string[] absent = [.. Axes.Where(c => table.Text(row, c) == "n/a")];
            if (absent.Length > 0)
            {
                table.Problems.Add(row.Line, string.Join(", ", absent), $"electrode {Shown.Quoted(name)} has no position (n/a); give it one or take its row out");
                continue;
            }

            double largest = TableCells.LargestPosition / 1000 * perMetre;
            Vec3 given = new(table.Number(row, "x", largest, unit), table.Number(row, "y", largest, unit), table.Number(row, "z", largest, unit));
            electrodes.Add((name, given / perMetre));
        }

        table.Problems.ThrowIfAny();
        List<string> warnings = coordinates is null ? [] : [.. coordinates.Warnings];
        return new(electrodes, unit, coordinates?.System, warnings);
    }
}
