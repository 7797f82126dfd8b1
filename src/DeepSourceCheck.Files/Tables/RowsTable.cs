using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Leadfields.Imported;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Tables;

/// <summary>rows.tsv: `row modality kind unit` and, where known, `x y z` in mm: what each row of imported leadfields is.</summary>
/// <param name="Eeg">EEG rows in the order of the file.</param>
/// <param name="Meg">MEG rows in the order of the file.</param>
public sealed record RowsTable(IReadOnlyList<ImportedRow> Eeg, IReadOnlyList<ImportedRow> Meg)
{
    private static readonly string[] VoltUnits = ["V/(A m)", "V"];
    private static readonly string[] TeslaUnits = ["T", "T/(A m)"];
    private static readonly string[] GradientUnits = ["T/m", "T/m/(A m)", "T/(A m^2)"];

    /// <summary>Reads the table. Units are those of the leadfield or of the field of 1 A m, which are the same numbers.</summary>
    /// <exception cref="InputException">Every problem of the file at once, with lines and columns.</exception>
    public static RowsTable Read(string path, string displayName)
    {
        TsvTable table = TsvTable.Read(path, displayName, "row", "modality", "kind", "unit");
        Dictionary<string, int> seen = new(StringComparer.Ordinal);
        List<ImportedRow> eeg = [], meg = [];
        foreach (TsvRow row in table.Rows)
        {
            string name = table.Name(row, "row", seen);
            Vec3? position = table.IsAbsent(row, "x") && table.IsAbsent(row, "y") && table.IsAbsent(row, "z") ? null : table.PositionInMm(row, "x", "y", "z");
            switch (table.Text(row, "modality"))
            {
                case "EEG":
                    if (table.Text(row, "kind") != "electrode")
                    {
                        table.Problems.Add(row.Line, "kind", $"{Shown.Quoted(table.Text(row, "kind"))} is no kind of an EEG row; electrode is");
                    }

                    CheckUnit(table, row, "an electrode", VoltUnits);
                    eeg.Add(new(name, null, position));
                    break;
                case "MEG":
                    CoilKind? kind = CoilsTable.Kind(table, row);
                    if (kind is { } known)
                    {
                        CheckUnit(table, row, $"a {Names.Of(known)}", known == CoilKind.PlanarGradiometer ? GradientUnits : TeslaUnits);
                    }

                    meg.Add(new(name, kind, position));
                    break;
                default:
                    table.Problems.Add(row.Line, "modality", $"{Shown.Quoted(table.Text(row, "modality"))} is no modality; EEG or MEG is");
                    break;
            }
        }

        table.Problems.ThrowIfAny();
        return new(eeg, meg);
    }

    private static void CheckUnit(TsvTable table, TsvRow row, string what, string[] allowed)
    {
        string unit = table.Text(row, "unit");
        if (!allowed.Any(u => WithoutSpaces(u) == WithoutSpaces(unit)))
        {
            table.Problems.Add(row.Line, "unit", $"{Shown.Quoted(unit)} is no unit of {what}; {string.Join(" or ", allowed)} is expected: scale the array and change the unit");
        }
    }

    private static string WithoutSpaces(string text) => text.Replace(" ", "", StringComparison.Ordinal);
}
