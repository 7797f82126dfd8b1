using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Files.Tables;

/// <summary>Cells that several tables share: positions and directions.</summary>
internal static class TableCells
{
    /// <summary>No position of a head or sensor lies farther from the origin along an axis [mm].</summary>
    public const double LargestPosition = 10_000;

    /// <summary>Distance of |axis| from 1 up to which a direction is kept as it is given.</summary>
    public const double UnitTolerance = 1e-6;

    /// <summary>Distance of |axis| from 1 up to which a direction is brought to length 1.</summary>
    public const double RoundedTolerance = 1e-3;

    /// <summary>A position [m] from three columns in mm; not finite after a noted problem.</summary>
    public static Vec3 PositionInMm(this TsvTable table, TsvRow row, string x, string y, string z) => new(
        Si.FromMm(table.Number(row, x, LargestPosition, "mm")),
        Si.FromMm(table.Number(row, y, LargestPosition, "mm")),
        Si.FromMm(table.Number(row, z, LargestPosition, "mm")));

    /// <summary>A unit vector from three columns: kept when its length is 1 within 1e-6, brought to length 1 within 1e-3, else a problem.</summary>
    /// <param name="table">Table.</param>
    /// <param name="row">Row.</param>
    /// <param name="prefix">Columns are prefix_x, prefix_y, prefix_z.</param>
    /// <param name="rounded">Counts vectors that were brought to length 1.</param>
    public static Vec3 UnitVector(this TsvTable table, TsvRow row, string prefix, ref int rounded)
    {
        Vec3 v = new(table.Number(row, prefix + "_x", 1e6, ""), table.Number(row, prefix + "_y", 1e6, ""), table.Number(row, prefix + "_z", 1e6, ""));
        if (!v.IsFinite)
        {
            return v;
        }

        double off = Math.Abs(v.Norm - 1);
        if (off <= UnitTolerance)
        {
            return v;
        }

        if (off <= RoundedTolerance)
        {
            rounded++;
            return v.Unit();
        }

        table.Problems.Add(row.Line, prefix + "_x", FormattableString.Invariant($"the vector ({v.X:G6}, {v.Y:G6}, {v.Z:G6}) has length {v.Norm:G6}; a unit vector is expected"));
        return v;
    }
}
