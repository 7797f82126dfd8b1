using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Tables;

/// <summary>A noise spectrum of the user's own: comma-separated values with a header, `frequency_Hz` and a density.</summary>
public static class DensityTable
{
    /// <summary>Column of the frequencies.</summary>
    public const string Frequency = "frequency_Hz";

    /// <summary>Column of the densities of an EEG table.</summary>
    public const string Microvolts = "density_uV_per_rtHz";

    /// <summary>Column of the densities of a MEG table.</summary>
    public const string Femtotesla = "density_fT_per_rtHz";

    // Largest frequency [Hz] and density [uV or fT per sqrt(Hz)] that are read.
    private const double MostFrequency = 1e6, MostDensity = 1e9;

    /// <summary>Reads a table.</summary>
    /// <param name="path">File.</param>
    /// <param name="displayName">As the user named it.</param>
    /// <param name="column">Column of the densities.</param>
    /// <param name="toSi">From the column's unit to V or T per sqrt(Hz).</param>
    /// <exception cref="InputException">Every problem of the file at once, with lines and columns.</exception>
    public static LogLogTable Read(string path, string displayName, string column, Func<double, double> toSi)
    {
        TsvTable table = TsvTable.Of(InputFileAccess.ReadAll(path, displayName, TsvTable.LargestFile), displayName, ',', [Frequency, column]);
        var points = new List<(double Frequency, double Density)>();
        double last = 0;
        int lastLine = 0;
        foreach (TsvRow row in table.Rows)
        {
            double frequency = table.Number(row, Frequency, MostFrequency, "Hz"), density = table.Number(row, column, MostDensity, column == Femtotesla ? "fT/sqrt(Hz)" : "uV/sqrt(Hz)");
            if (frequency <= 0)
            {
                table.Problems.Add(row.Line, Frequency, FormattableString.Invariant($"the frequency {frequency:G6} Hz is not above 0; the table stands on logarithms: begin at the lowest frequency that was measured"));
            }
            else if (frequency <= last)
            {
                table.Problems.Add(row.Line, Frequency, FormattableString.Invariant($"the frequency {frequency:G6} Hz does not lie above that of line {lastLine} ({last:G6} Hz); sort the rows by rising frequency"));
            }

            if (density <= 0)
            {
                table.Problems.Add(row.Line, column, FormattableString.Invariant($"the density {density:G6} is not above 0; between rows the table is a power law: leave out rows without noise"));
            }

            points.Add((frequency, toSi(density)));
            (last, lastLine) = double.IsFinite(frequency) ? (frequency, row.Line) : (last, lastLine);
        }

        if (table.Rows.Count == 1 && table.Problems.IsEmpty)
        {
            table.Problems.Add(0, null, "the table has a single row; give two frequencies at least");
        }

        table.Problems.ThrowIfAny();
        return new([.. points]);
    }
}
