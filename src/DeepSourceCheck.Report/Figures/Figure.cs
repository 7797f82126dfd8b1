namespace DeepSourceCheck.Report.Figures;

/// <summary>The numbers behind a figure.</summary>
/// <param name="Columns">Headings with units.</param>
/// <param name="Rows">As many cells as columns.</param>
public sealed record FigureTable(IReadOnlyList<string> Columns, IReadOnlyList<IReadOnlyList<string>> Rows);

/// <summary>A figure: what it finds, what it shows, and how to draw it at a width.</summary>
/// <param name="Name">File name without extension.</param>
/// <param name="Title">The finding.</param>
/// <param name="Quantity">Quantity against axis, for the caption's start.</param>
/// <param name="Conditions">What the figure is conditional on, what the spread is.</param>
/// <param name="Alt">Title and three key numbers, for those who do not see it.</param>
/// <param name="Table">The numbers.</param>
/// <param name="FullWidth">True for figures that span both columns of the page.</param>
/// <param name="Draw">Draws at a width [px].</param>
public sealed record Figure(
    string Name, string Title, string Quantity, string Conditions, string Alt, FigureTable Table, bool FullWidth, Func<int, FigureSheet> Draw)
{
    /// <summary>Width of a figure in one of two columns [px].</summary>
    public const int ColumnWidth = 580;

    /// <summary>Width of a figure over both columns [px].</summary>
    public const int PageWidth = 1200;

    /// <summary>Width on a phone [px].</summary>
    public const int PhoneWidth = 340;

    /// <summary>The width at which files are written [px].</summary>
    public int FileWidth => FullWidth ? PageWidth : ColumnWidth;
}
