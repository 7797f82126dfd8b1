using System.Collections;
using System.Runtime.CompilerServices;
using System.Text;

namespace DeepSourceCheck.Core.Regions;

/// <summary>Names of points, in their order: given as strings, or as slices of a file's bytes that become strings when they are asked for.</summary>
/// <remarks>Hundreds of thousands of points are read and computed without a string each; only what prints a name makes one.</remarks>
[CollectionBuilder(typeof(PointNames), nameof(Create))]
public sealed class PointNames : IReadOnlyList<string>
{
    private readonly string[] _texts = [];
    private readonly byte[] _bytes = [];
    private readonly int[] _starts = [], _lengths = [];

    private PointNames(string[] texts) => _texts = texts;

    private PointNames(byte[] bytes, int[] starts, int[] lengths) => (_bytes, _starts, _lengths) = (bytes, starts, lengths);

    /// <summary>Number of names.</summary>
    public int Length => _texts.Length + _starts.Length;

    /// <inheritdoc/>
    public int Count => Length;

    /// <summary>The name of a point.</summary>
    public string this[int index] => _starts.Length == 0 ? _texts[index] : Encoding.UTF8.GetString(_bytes, _starts[index], _lengths[index]);

    /// <summary>Names as they are.</summary>
    public static PointNames Create(ReadOnlySpan<string> names) => new(names.ToArray());

    /// <summary>Names within a text.</summary>
    /// <param name="bytes">UTF-8; kept, not copied.</param>
    /// <param name="starts">First byte of each name.</param>
    /// <param name="lengths">Bytes of each name.</param>
    /// <exception cref="ArgumentException">Not as many starts as lengths.</exception>
    public static PointNames Slices(byte[] bytes, int[] starts, int[] lengths) => starts.Length == lengths.Length
        ? new(bytes, starts, lengths)
        : throw new ArgumentException($"{starts.Length} starts and {lengths.Length} lengths.", nameof(lengths));

    /// <summary>The names of some points.</summary>
    /// <param name="rows">Their indices, in the order wanted.</param>
    public PointNames At(int[] rows)
    {
        if (_starts.Length == 0)
        {
            return new(Array.ConvertAll(rows, row => _texts[row]));
        }

        int[] starts = new int[rows.Length], lengths = new int[rows.Length];
        for (int k = 0; k < rows.Length; k++)
        {
            (starts[k], lengths[k]) = (_starts[rows[k]], _lengths[rows[k]]);
        }

        return new(_bytes, starts, lengths);
    }

    /// <inheritdoc/>
    public IEnumerator<string> GetEnumerator()
    {
        for (int k = 0; k < Length; k++)
        {
            yield return this[k];
        }
    }

    IEnumerator IEnumerable.GetEnumerator() => GetEnumerator();
}
