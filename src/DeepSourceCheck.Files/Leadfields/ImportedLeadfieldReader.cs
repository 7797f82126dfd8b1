using DeepSourceCheck.Core.Leadfields.Imported;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Npy;
using DeepSourceCheck.Files.Tables;

using static System.FormattableString;

namespace DeepSourceCheck.Files.Leadfields;

/// <summary>Reads leadfields that were computed elsewhere: eeg.npy, meg.npy, points.tsv, rows.tsv.</summary>
public static class ImportedLeadfieldReader
{
    /// <summary>Largest value [V/(A m)] of an EEG leadfield outside which the unit is likely wrong; a current in a head gives some tens (common practice, no source).</summary>
    private static readonly (double Low, double High) UsualEeg = (1e-1, 1e5);

    /// <summary>Largest value [T/(A m)] of a MEG leadfield, likewise; 1e-7/r^2 at 2 to 20 cm, gradients up to 100 times more (common practice, no source).</summary>
    private static readonly (double Low, double High) UsualMeg = (1e-9, 1e-1);

    /// <summary>Reads arrays and tables and holds them against each other. Sizes are checked before the arrays are read.</summary>
    /// <param name="eeg">eeg.npy as (path, name for messages), or null.</param>
    /// <param name="meg">meg.npy likewise, or null; not both.</param>
    /// <param name="points">points.tsv.</param>
    /// <param name="rows">rows.tsv; rows of a modality whose array is not given are left alone.</param>
    /// <exception cref="InputException">A file cannot be read or contradicts another; names both.</exception>
    public static (ImportedLeadfield Leadfield, IReadOnlyList<string> Warnings) Read(
        (string Path, string Display)? eeg, (string Path, string Display)? meg, (string Path, string Display) points, (string Path, string Display) rows)
    {
        if (eeg is null && meg is null)
        {
            throw new InputException(null, "head.leadfields", "neither eeg nor meg is given; at least one array is needed");
        }

        PointsTable pointsTable = PointsTable.Read(points.Path, points.Display);
        RowsTable rowsTable = RowsTable.Read(rows.Path, rows.Display);
        IReadOnlyList<ImportedRow> eegRows = eeg is null ? [] : rowsTable.Eeg, megRows = meg is null ? [] : rowsTable.Meg;
        int count = pointsTable.Points.Count;
        CheckShape(eeg, "EEG", eegRows.Count, count, points.Display, rows.Display);
        CheckShape(meg, "MEG", megRows.Count, count, points.Display, rows.Display);

        List<string> warnings = [.. pointsTable.Warnings];
        double[] eegValues = Values(eeg), megValues = Values(meg);
        string?[] reasons = new string?[count];
        NoteNonFinite(eegValues, eeg?.Display, eegRows, reasons);
        NoteNonFinite(megValues, meg?.Display, megRows, reasons);
        WarnOfUnusable(pointsTable, reasons, warnings);
        WarnOfSize(eegValues, eeg?.Display, "V/(A m)", UsualEeg, warnings);
        WarnOfSize(megValues, meg?.Display, "T/(A m)", UsualMeg, warnings);
        ImportedPoint[] imported = [.. pointsTable.Points.Select((p, n) => new ImportedPoint(p.Name, p.Position, reasons[n]))];
        return imported.Any(p => p.WhyUnusable is null)
            ? (new ImportedLeadfield(imported, eegRows, eegValues, megRows, megValues), warnings)
            : throw new InputException((eeg ?? meg)!.Value.Display, null, $"no point is usable: every one has NaN or infinite values, the first because {reasons[0]}");
    }

    private static void CheckShape((string Path, string Display)? file, string modality, int rows, int points, string pointsName, string rowsName)
    {
        if (file is not { } array)
        {
            return;
        }

        if (rows == 0)
        {
            throw new InputException(rowsName, "modality", $"the table has no {modality} row, but {array.Display} is given; list its rows");
        }

        NpyHeader header = NpyReader.ReadHeader(array.Path, array.Display);
        IReadOnlyList<int> shape = header.Shape;
        bool fits = shape.Count == 3 && shape[0] == rows && shape[1] == points && shape[2] == 3
            || shape.Count == 2 && shape[0] == rows && shape[1] == 3L * points;
        if (!fits)
        {
            throw new InputException(array.Display, "shape",
                $"the array is {header.ShapeText}; {rows} {modality} rows in {rowsName} and {points} points in {pointsName} make it {rows} x {points} x 3 or {rows} x {3L * points} (x, y, z of a point side by side)");
        }
    }

    private static double[] Values((string Path, string Display)? file) => file is { } array ? NpyReader.Read(array.Path, array.Display).Values : [];

    private static void NoteNonFinite(double[] values, string? displayName, IReadOnlyList<ImportedRow> rows, string?[] reasons)
    {
        for (int n = 0; n < values.Length; n++)
        {
            if (!double.IsFinite(values[n]))
            {
                int point = n / 3 % reasons.Length;
                reasons[point] ??= Invariant($"{displayName} holds {values[n]} for it in row {Shown.Text(rows[n / 3 / reasons.Length].Name)}");
            }
        }
    }

    private static void WarnOfUnusable(PointsTable points, string?[] reasons, List<string> warnings)
    {
        const int Listed = 10;
        int[] bad = [.. Enumerable.Range(0, reasons.Length).Where(n => reasons[n] is not null)];
        if (bad.Length > 0)
        {
            string names = string.Join(", ", bad.Take(Listed).Select(n => Shown.Text(points.Points[n].Name)));
            warnings.Add($"{bad.Length} of {reasons.Length} imported points are unusable: {names}{(bad.Length > Listed ? " and others" : "")}; {reasons[bad[0]]}");
        }
    }

    private static void WarnOfSize(double[] values, string? displayName, string unit, (double Low, double High) usual, List<string> warnings)
    {
        double largest = 0;
        foreach (double value in values)
        {
            largest = double.IsFinite(value) ? Math.Max(largest, Math.Abs(value)) : largest;
        }

        if (values.Length > 0 && (largest < usual.Low || largest > usual.High))
        {
            warnings.Add(Invariant($"{displayName}: the largest value is {largest:G4} {unit}, where {usual.Low:0.#########} to {usual.High:0.#} are usual: check the unit in rows.tsv"));
        }
    }
}
