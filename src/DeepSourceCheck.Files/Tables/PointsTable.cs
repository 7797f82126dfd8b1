using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Tables;

/// <summary>One row of points.tsv.</summary>
/// <param name="Name">Unique name.</param>
/// <param name="Position">Place [m], in the frame of the regions.</param>
/// <param name="Direction">Unit vector, or null where the table gives none.</param>
/// <param name="Line">Line in the file.</param>
public readonly record struct TablePoint(string Name, Vec3 Position, Vec3? Direction, int Line);

/// <summary>points.tsv: `name x y z` in mm, optionally `direction_x direction_y direction_z`.</summary>
/// <param name="Points">In the order of the file, at least one.</param>
/// <param name="Warnings">What the user must know.</param>
public sealed record PointsTable(IReadOnlyList<TablePoint> Points, IReadOnlyList<string> Warnings)
{
    private static readonly string[] DirectionColumns = ["direction_x", "direction_y", "direction_z"];

    /// <summary>Reads the table; other columns are left alone.</summary>
    /// <exception cref="InputException">Every problem of the file at once, with lines and columns.</exception>
    public static PointsTable Read(string path, string displayName)
    {
        TsvTable table = TsvTable.Read(path, displayName, "name", "x", "y", "z");
        int directions = DirectionColumns.Count(table.Has);
        if (directions is 1 or 2)
        {
            table.Problems.Add(0, string.Join(", ", DirectionColumns.Where(c => !table.Has(c))), "the column is missing: a direction needs all three of direction_x, direction_y, direction_z");
        }

        Dictionary<string, int> seen = new(table.Rows.Count, StringComparer.Ordinal);
        List<TablePoint> points = new(table.Rows.Count);
        int rounded = 0;
        foreach (TsvRow row in table.Rows)
        {
            string name = table.Name(row, "name", seen);
            Vec3 position = table.PositionInMm(row, "x", "y", "z");
            bool has = directions == 3 && !DirectionColumns.All(c => table.IsAbsent(row, c));
            points.Add(new(name, position, has ? table.UnitVector(row, "direction", ref rounded) : null, row.Line));
        }

        table.Problems.ThrowIfAny();
        return new(points, rounded > 0 ? [$"{displayName}: {rounded} directions were not quite of length 1 and were brought to it"] : []);
    }
}
