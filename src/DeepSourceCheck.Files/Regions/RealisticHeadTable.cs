using System.Globalization;

using DeepSourceCheck.Core.Regions;

namespace DeepSourceCheck.Files.Regions;

/// <summary>What a realistic head changes at the deep structures of the library: regions/realistic-head.tsv, which states how the figures were measured.</summary>
public sealed class RealisticHeadTable
{
    /// <summary>Name of the file, for messages.</summary>
    public const string File = "regions/realistic-head.tsv";

    private const string Resource = "library/realistic-head.tsv";

    private static readonly string[] Columns =
    [
        "structure", "phantom_cz_dB", "phantom_eeg_dB", "phantom_meg_dB", "real_cz_dB", "real_eeg_dB", "real_meg_dB", "weakest_over_strongest", "weakest_to_outward_deg",
    ];

    private readonly Dictionary<string, double[]> _rows;

    private RealisticHeadTable(Dictionary<string, double[]> rows) => _rows = rows;

    /// <summary>Structures with figures, in the file's order.</summary>
    public IReadOnlyCollection<string> Structures => _rows.Keys;

    /// <summary>The table that travels inside the program.</summary>
    /// <exception cref="InvalidDataException">It is malformed: a fault of the build.</exception>
    public static RealisticHeadTable Load()
    {
        using Stream stream = typeof(RealisticHeadTable).Assembly.GetManifestResourceStream(Resource)!;
        using StreamReader reader = new(stream);
        return Read(reader);
    }

    /// <summary>Reads a table: lines of comment, a header, a row a structure; cells between single tabs.</summary>
    /// <param name="text">The file's text.</param>
    /// <exception cref="InvalidDataException">Malformed; names file, line and column.</exception>
    public static RealisticHeadTable Read(TextReader text)
    {
        Dictionary<string, double[]> rows = new(StringComparer.Ordinal);
        bool header = false;
        int number = 0;
        while (text.ReadLine() is { } line)
        {
            number++;
            if (line.Length == 0 || line[0] == '#')
            {
                continue;
            }

            string[] cells = line.Split('\t');
            if (!header)
            {
                if (!cells.AsSpan().SequenceEqual(Columns))
                {
                    throw Wrong(number, $"the columns must be {string.Join(' ', Columns)}");
                }

                header = true;
                continue;
            }

            if (cells.Length != Columns.Length)
            {
                throw Wrong(number, $"the row has {cells.Length} cells, the header {Columns.Length}");
            }

            double[] figures = new double[Columns.Length - 1];
            for (int k = 0; k < figures.Length; k++)
            {
                figures[k] = double.TryParse(cells[k + 1], NumberStyles.Float, CultureInfo.InvariantCulture, out double value) && double.IsFinite(value)
                    ? value
                    : throw Wrong(number, $"{Columns[k + 1]} must be a number, not '{cells[k + 1]}'");
            }

            if (!rows.TryAdd(cells[0], figures))
            {
                throw Wrong(number, $"{cells[0]} has a row already");
            }
        }

        return new(rows);
    }

    /// <summary>The figures for a region, or null where its structure has none.</summary>
    /// <param name="region">Name of the region.</param>
    /// <param name="structure">Its structure.</param>
    /// <param name="side">`left`, `right` or `midline`; the right side has the figures of the left one.</param>
    public RealisticHeadEffect? Find(string region, string structure, string side) => _rows.TryGetValue(structure, out double[]? f)
        ? new(region, side == "right" ? "left" : null, new(f[0], f[1], f[2]), new(f[3], f[4], f[5]), f[6], f[7])
        : null;

    private static InvalidDataException Wrong(int line, string what) => new(string.Create(CultureInfo.InvariantCulture, $"{File}: line {line}: {what}"));
}
