using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Tables;

/// <summary>One row of points.tsv.</summary>
/// <param name="Name">Unique name.</param>
/// <param name="Position">Place [m], in the frame of the regions.</param>
/// <param name="Direction">Unit vector, or null where the table gives none.</param>
/// <param name="Line">Line in the file.</param>
public readonly record struct TablePoint(string Name, Vec3 Position, Vec3? Direction, int Line);

/// <summary>points.tsv: `name x y z` in mm, optionally `direction_x direction_y direction_z`.</summary>
public sealed class PointsTable
{
    private static readonly string[] DirectionColumns = ["direction_x", "direction_y", "direction_z"];

    private readonly Lazy<IReadOnlyList<TablePoint>> _points;

    private PointsTable(IReadOnlyList<TablePoint> points, IReadOnlyList<string> warnings)
    {
        (Names, Positions, Warnings) = ([.. points.Select(p => p.Name)], [.. points.Select(p => p.Position)], warnings);
        _points = new(points);
    }

    private PointsTable(PointNames names, Vec3[] positions)
    {
        (Names, Positions, Warnings) = (names, positions, []);
        // A clean table has its header in line 1 and no blank line.
        _points = new(() => [.. positions.Select((p, k) => new TablePoint(names[k], p, null, k + 2))]);
    }

    /// <summary>Names in the order of the file, at least one.</summary>
    public PointNames Names { get; }

    /// <summary>Positions [m], as many as names.</summary>
    public Vec3[] Positions { get; }

    /// <summary>The same as rows, with directions and lines; made when first asked for.</summary>
    public IReadOnlyList<TablePoint> Points => _points.Value;

    /// <summary>What the user must know.</summary>
    public IReadOnlyList<string> Warnings { get; }

    /// <summary>Reads the table; other columns are left alone.</summary>
    /// <param name="path">File.</param>
    /// <param name="displayName">As the user named it.</param>
    /// <param name="read">Given the file's bytes before they are parsed, so that whoever digests them need not read them again.</param>
    /// <exception cref="InputException">Every problem of the file at once, with lines and columns.</exception>
    public static PointsTable Read(string path, string displayName, Action<byte[]>? read = null)
    {
        byte[] bytes = InputFileAccess.ReadAll(path, displayName, TsvTable.LargestFile);
        read?.Invoke(bytes);
        return CleanPoints.TryRead(bytes, out PointNames names, out Vec3[] positions) ? new(names, positions) : Careful(bytes, displayName);
    }

    /// <summary>Reads any table of points, row by row.</summary>
    /// <exception cref="InputException">As for <see cref="Read"/>.</exception>
    internal static PointsTable Careful(byte[] bytes, string displayName)
    {
        TsvTable table = TsvTable.Of(bytes, displayName, "name", "x", "y", "z");
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
