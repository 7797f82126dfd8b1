using System.Globalization;

using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Tables;

/// <summary>A table of values separated by tabs, or by commas where asked: UTF-8 with or without byte order mark, LF or CRLF, one header row, columns by name in any order, blank lines ignored.</summary>
internal sealed class TsvTable
{
    /// <summary>Largest file that is read [bytes].</summary>
    public const long LargestFile = 1L << 28;

    private const int MostAsked = 16;
    private readonly Dictionary<string, int> _columns;
    private readonly List<(string Name, int At)> _asked = [];

    private readonly string _text;
    private readonly char _separator;

    private TsvTable(string text, char separator, Dictionary<string, int> columns, List<TsvRow> rows, ProblemList problems) =>
        (_text, _separator, _columns, Rows, Problems) = (text, separator, columns, rows, problems);

    /// <summary>Data rows, in order.</summary>
    public IReadOnlyList<TsvRow> Rows { get; }

    /// <summary>What was found wrong so far; typed readers add to it and throw it.</summary>
    public ProblemList Problems { get; }

    /// <summary>True when the table has the column.</summary>
    public bool Has(string column) => _columns.ContainsKey(column);

    /// <summary>Reads a table.</summary>
    /// <param name="path">File.</param>
    /// <param name="displayName">As the user named it.</param>
    /// <param name="required">Columns that must be there.</param>
    /// <exception cref="InputException">The file cannot be read, has no rows or lacks a column; row problems are collected in <see cref="Problems"/>.</exception>
    public static TsvTable Read(string path, string displayName, params string[] required) =>
        Of(InputFileAccess.ReadAll(path, displayName, LargestFile), displayName, required);

    /// <summary>The table of a file that was read; otherwise as <see cref="Read"/>.</summary>
    public static TsvTable Of(byte[] bytes, string displayName, params string[] required) => Of(bytes, displayName, '\t', required);

    /// <summary>The table of a file whose cells stand between tabs or commas, without quotes; otherwise as <see cref="Read"/>.</summary>
    public static TsvTable Of(byte[] bytes, string displayName, char separator, string[] required)
    {
        string text = Utf8Text.Decode(bytes, displayName);
        ProblemList problems = new(displayName);
        Dictionary<string, int>? columns = null;
        List<TsvRow> rows = [];
        int number = 0;
        foreach (ReadOnlySpan<char> line in text.AsSpan().EnumerateLines())
        {
            number++;
            if (line.IsWhiteSpace())
            {
                continue;
            }

            if (columns is null)
            {
                columns = Header(line.ToString().Split(separator, StringSplitOptions.TrimEntries), number, separator, required, problems);
                problems.ThrowIfAny();
                continue;
            }

            int cells = line.Count(separator) + 1;
            if (cells != columns.Count)
            {
                problems.Add(number, null, $"the row has {cells} cells and the header {columns.Count}; separate cells by single {Called(separator)}{(separator == ',' ? " and write decimal points" : "")}");
            }
            else
            {
                rows.Add(new(number, StartOf(text, line), line.Length));
            }
        }

        if (rows.Count == 0 && problems.IsEmpty)
        {
            problems.Add(0, null, columns is null ? $"the file holds no text; a header row is expected: {string.Join(' ', required)}" : "the table has a header but no rows");
        }

        if (columns is null)
        {
            problems.ThrowIfAny();
        }

        return new(text, separator, columns!, rows, problems);
    }

    /// <summary>A cell's text; empty where the table lacks the column.</summary>
    public string Text(TsvRow row, string column) => Cell(row, column).ToString();

    /// <summary>True when a cell is empty or says n/a, or the table lacks the column.</summary>
    public bool IsAbsent(TsvRow row, string column) => Cell(row, column) is "" or "n/a";

    /// <summary>A name: not empty, without control characters, unlike all earlier ones.</summary>
    /// <param name="row">Row.</param>
    /// <param name="column">Column.</param>
    /// <param name="seen">Names so far with their lines; null when repeats are allowed.</param>
    public string Name(TsvRow row, string column, Dictionary<string, int>? seen)
    {
        string name = Text(row, column);
        if (name.Length == 0)
        {
            Problems.Add(row.Line, column, "the name is empty");
        }
        else if (name.AsSpan().IndexOfAnyInRange('\0', '\u001f') >= 0 || name.AsSpan().IndexOfAnyInRange('\u007f', '\u009f') >= 0)
        {
            Problems.Add(row.Line, column, $"the name {Shown.Quoted(name)} holds a control character");
        }
        else if (seen is not null && !seen.TryAdd(name, row.Line))
        {
            Problems.Add(row.Line, column, $"the name {Shown.Quoted(name)} stands already in line {seen[name]}; names must be unique");
        }

        return name;
    }

    /// <summary>A finite number of at most the given size; NaN after noting a problem.</summary>
    /// <param name="row">Row.</param>
    /// <param name="column">Column.</param>
    /// <param name="largest">Largest absolute value, in the column's unit.</param>
    /// <param name="unit">The column's unit, for the message.</param>
    public double Number(TsvRow row, string column, double largest, string unit)
    {
        ReadOnlySpan<char> cell = Cell(row, column);
        if (!PlainDecimal.TryParse(cell, out double value) && !double.TryParse(cell, NumberStyles.Float, CultureInfo.InvariantCulture, out value))
        {
            string text = cell.ToString();
            Problems.Add(row.Line, column, text.Length == 0
                ? "the cell is empty; a number is expected"
                : $"{Shown.Quoted(text)} is not a number{(text.Contains(',') ? " (write a decimal point, no thousands separators)" : "")}");
            return double.NaN;
        }

        if (!(Math.Abs(value) <= largest))
        {
            Problems.Add(row.Line, column, FormattableString.Invariant($"'{Shown.Text(cell.ToString())}' is out of range; a finite number of at most {largest:0.######}{(unit.Length > 0 ? " " : "")}{unit} in size is expected"));
            return double.NaN;
        }

        return value;
    }

    // A cell is cut out of the file's text when it is asked for: a table of many rows holds no string a cell.
    private ReadOnlySpan<char> Cell(TsvRow row, string column)
    {
        int at = IndexOf(column);
        if (at < 0)
        {
            return default;
        }

        ReadOnlySpan<char> rest = _text.AsSpan(row.Start, row.Length);
        for (; at > 0; at--)
        {
            rest = rest[(rest.IndexOf(_separator) + 1)..];
        }

        int end = rest.IndexOf(_separator);
        return (end < 0 ? rest : rest[..end]).Trim();
    }

    // Readers ask for the same few names row by row: the very strings, which are recognised without being compared.
    private int IndexOf(string column)
    {
        foreach ((string name, int at) in _asked)
        {
            if (ReferenceEquals(name, column))
            {
                return at;
            }
        }

        int found = _columns.GetValueOrDefault(column, -1);
        if (_asked.Count < MostAsked)
        {
            _asked.Add((column, found));
        }

        return found;
    }

    private static string Called(char separator) => separator == ',' ? "commas" : "tabs";

    private static int StartOf(string text, ReadOnlySpan<char> line)
    {
        text.AsSpan().Overlaps(line, out int start);
        return start;
    }

    private static Dictionary<string, int> Header(string[] cells, int line, char separator, string[] required, ProblemList problems)
    {
        Dictionary<string, int> columns = new(StringComparer.Ordinal);
        for (int k = 0; k < cells.Length; k++)
        {
            if (!columns.TryAdd(cells[k], k))
            {
                problems.Add(line, Shown.Text(cells[k]), cells[k].Length == 0 ? "two columns of the header have no name" : "the header names this column twice");
            }
        }

        foreach (string column in required.Where(c => !columns.ContainsKey(c)))
        {
            string found = Shown.Text(string.Join(", ", cells));
            problems.Add(line, column, $"the column is missing; the header has: {found}{(cells.Length == 1 ? $" (columns are separated by {Called(separator)})" : "")}");
        }

        return columns;
    }
}

/// <summary>One row of a table.</summary>
/// <param name="Line">Line in the file, from 1.</param>
/// <param name="Start">Its first character in the text.</param>
/// <param name="Length">Its characters.</param>
internal readonly record struct TsvRow(int Line, int Start, int Length);
