using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;

using static System.FormattableString;

namespace DeepSourceCheck.Files.Tables;

/// <summary>coils.tsv: one row an integration point, `channel kind x_mm y_mm z_mm axis_x axis_y axis_z share`.</summary>
/// <param name="Channels">In the order of their first rows, each with its points in the order of the file; at least one.</param>
/// <param name="Warnings">What the user must know.</param>
public sealed record CoilsTable(IReadOnlyList<MegChannel> Channels, IReadOnlyList<string> Warnings)
{
    /// <summary>Difference of a channel's summed shares from 1 (magnetometer) or 0 (gradiometer), relative to the sum of their sizes, from which it is said.</summary>
    private const double ShareTolerance = 1e-3;

    /// <summary>Largest share, in 1/m for planar gradiometers: a baseline of a micrometre.</summary>
    private const double LargestShare = 1e6;

    /// <summary>Reads the table.</summary>
    /// <exception cref="InputException">Every problem of the file at once, with lines and columns.</exception>
    public static CoilsTable Read(string path, string displayName)
    {
        TsvTable table = TsvTable.Read(path, displayName, "channel", "kind", "x_mm", "y_mm", "z_mm", "axis_x", "axis_y", "axis_z", "share");
        Dictionary<string, Group> groups = new(StringComparer.Ordinal);
        List<Group> ordered = [];
        int rounded = 0;
        foreach (TsvRow row in table.Rows)
        {
            string name = table.Name(row, "channel", seen: null);
            CoilKind? kind = Kind(table, row);
            CoilPoint point = new(table.PositionInMm(row, "x_mm", "y_mm", "z_mm"), table.UnitVector(row, "axis", ref rounded), table.Number(row, "share", LargestShare, ""));
            if (!groups.TryGetValue(name, out Group? group))
            {
                groups.Add(name, group = new(name, kind, row.Line, []));
                ordered.Add(group);
            }
            else if (kind is { } here && group.Kind is { } before && here != before)
            {
                table.Problems.Add(row.Line, "kind", $"channel {Shown.Quoted(name)} is a {Names.Of(here)} here and a {Names.Of(before)} in line {group.Line}; all rows of a channel have one kind");
            }

            group.Points.Add(point);
        }

        foreach (Group group in ordered.Where(g => g.Points.All(p => p.Share == 0)))
        {
            table.Problems.Add(group.Line, "share", $"all shares of channel {Shown.Quoted(group.Name)} are 0; at least one other is needed");
        }

        table.Problems.ThrowIfAny();
        List<string> warnings = [];
        if (rounded > 0)
        {
            warnings.Add($"{displayName}: {rounded} axes were not quite of length 1 and were brought to it");
        }

        WarnOfShares(ordered, displayName, warnings);
        return new([.. ordered.Select(g => new MegChannel(g.Name, g.Kind!.Value, g.Points))], warnings);
    }

    /// <summary>A coil kind by its name; null after noting a problem.</summary>
    internal static CoilKind? Kind(TsvTable table, TsvRow row)
    {
        string text = table.Text(row, "kind");
        foreach (CoilKind kind in Enum.GetValues<CoilKind>())
        {
            if (Names.Of(kind) == text)
            {
                return kind;
            }
        }

        table.Problems.Add(row.Line, "kind", $"{Shown.Quoted(text)} is no coil kind; {string.Join(", ", Enum.GetValues<CoilKind>().Select(Names.Of))} are");
        return null;
    }

    private static void WarnOfShares(List<Group> groups, string displayName, List<string> warnings)
    {
        foreach (CoilKind kind in Enum.GetValues<CoilKind>())
        {
            double wanted = kind == CoilKind.Magnetometer ? 1 : 0;
            Group[] odd = [.. groups.Where(g => g.Kind == kind
                && Math.Abs(g.Points.Sum(p => p.Share) - wanted) > ShareTolerance * g.Points.Sum(p => Math.Abs(p.Share)))];
            if (odd.Length > 0)
            {
                warnings.Add(Invariant($"{displayName}: the shares of {odd.Length} {Names.Of(kind)} channels do not add up to {wanted}, first of {Shown.Quoted(odd[0].Name)} ({odd[0].Points.Sum(p => p.Share):G6}); they are used as they stand"));
            }
        }
    }

    private sealed record Group(string Name, CoilKind? Kind, int Line, List<CoilPoint> Points);
}
