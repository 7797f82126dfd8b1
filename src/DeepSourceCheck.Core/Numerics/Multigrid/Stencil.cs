namespace DeepSourceCheck.Core.Numerics.Multigrid;

/// <summary>Places of a 27-point stencil: (dx + 1) + 3 (dy + 1) + 9 (dz + 1).</summary>
internal static class Stencil
{
    /// <summary>Coefficients.</summary>
    public const int Size = 27;

    /// <summary>The node itself.</summary>
    public const int Centre = 13;

    /// <summary>Floats from one stencil of a table to the next.</summary>
    public const int Stride = 28;

    /// <summary>The place of a neighbour; each step -1, 0 or 1.</summary>
    public static int At(int dx, int dy, int dz) => Centre + dx + 3 * dy + 9 * dz;

    /// <summary>The steps to the neighbour at a place.</summary>
    public static (int Dx, int Dy, int Dz) Step(int place) => (place % 3 - 1, place / 3 % 3 - 1, place / 9 - 1);
}
