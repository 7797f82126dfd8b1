namespace DeepSourceCheck.Files.Npy;

/// <summary>What the header of a .npy file says, checked against the file's length.</summary>
public sealed record NpyHeader
{
    /// <summary>Sizes of the axes; empty for a single number.</summary>
    public required IReadOnlyList<int> Shape { get; init; }

    /// <summary>True when the first axis runs fastest in the file.</summary>
    public required bool FortranOrder { get; init; }

    /// <summary>True for big-endian numbers.</summary>
    public required bool BigEndian { get; init; }

    /// <summary>Bytes of one number: 4 or 8.</summary>
    public required int ItemSize { get; init; }

    /// <summary>Byte at which the numbers begin.</summary>
    public required long DataOffset { get; init; }

    /// <summary>How many numbers there are.</summary>
    public required int Count { get; init; }

    /// <summary>The shape as messages write it: `64 x 100 x 3`.</summary>
    public string ShapeText => Shape.Count == 0 ? "a single number" : string.Join(" x ", Shape);
}

/// <summary>An array as read.</summary>
/// <param name="Header">Shape and storage.</param>
/// <param name="Values">Numbers with the last axis fastest, whatever the order in the file.</param>
public sealed record NpyArray(NpyHeader Header, double[] Values)
{
    /// <summary>Position of the first number that is NaN or infinite, or -1.</summary>
    public int FirstNonFinite { get; } = Array.FindIndex(Values, v => !double.IsFinite(v));

    /// <summary>Indices of a position in <see cref="Values"/>, counted from 0: `[3, 0, 2]`.</summary>
    public string IndexText(int position)
    {
        int[] index = new int[Header.Shape.Count];
        for (int axis = index.Length - 1; axis >= 0; axis--)
        {
            (position, index[axis]) = Math.DivRem(position, Header.Shape[axis]);
        }

        return $"[{string.Join(", ", index)}]";
    }
}
