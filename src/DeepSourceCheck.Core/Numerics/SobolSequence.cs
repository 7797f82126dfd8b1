using System.Globalization;
using System.Numerics;

namespace DeepSourceCheck.Core.Numerics;

// SobolSequence.cs - a low-discrepancy sequence in the unit cube, in base 2.
//   Point n, coordinate j: the exclusive or of the direction numbers v_jk over the bits k that are set in n. v_jk follow from a primitive polynomial of degree s and odd m_1 ... m_s:
//   m_k = 2 a_1 m_(k-1) xor 4 a_2 m_(k-2) xor ... xor 2^s m_(k-s) xor m_(k-s), v_k = m_k / 2^k. Any 2^q consecutive points from a multiple of 2^q fall one into each of 2^q equal intervals,
//   coordinate by coordinate. A digital shift (exclusive or with a fixed number) keeps that and moves the first point off the origin.
// Source: Sobol 1967, USSR Comput Math Math Phys 7:86; Bratley & Fox 1988, ACM TOMS 14:88; direction numbers of Joe & Kuo 2008, SIAM J Sci Comput 30:2635 (first dimensions, from memory;
//   a test compares the points with an independent implementation).

/// <summary>The Sobol sequence, with a fixed digital shift: the same points in every run.</summary>
public sealed class SobolSequence
{
    /// <summary>Largest number of coordinates.</summary>
    public const int MostDimensions = 13;

    private const int Bits = 32;

    // Degree s, inner coefficients a, and m_1 ... m_s of dimensions 2 to 13; the first dimension is the van der Corput sequence.
    private static readonly (int Degree, uint Inner, uint[] Initial)[] Polynomials =
    [
        (1, 0, [1]),
        (2, 1, [1, 3]),
        (3, 1, [1, 3, 1]),
        (3, 2, [1, 1, 1]),
        (4, 1, [1, 1, 3, 3]),
        (4, 4, [1, 3, 5, 13]),
        (5, 2, [1, 1, 5, 5, 17]),
        (5, 4, [1, 1, 5, 5, 5]),
        (5, 7, [1, 1, 7, 11, 19]),
        (5, 11, [1, 1, 5, 1, 1]),
        (5, 13, [1, 1, 1, 3, 11]),
        (5, 14, [1, 3, 5, 5, 31]),
    ];

    private readonly uint[][] _directions;
    private readonly uint[] _shift;

    /// <param name="dimensions">Number of coordinates, 1 to <see cref="MostDimensions"/>.</param>
    /// <param name="shifted">False: the plain sequence, whose first point is the origin.</param>
    /// <exception cref="ArgumentOutOfRangeException">Too few or too many coordinates.</exception>
    public SobolSequence(int dimensions, bool shifted = true)
    {
        if (dimensions is < 1 or > MostDimensions)
        {
            throw new ArgumentOutOfRangeException(nameof(dimensions), dimensions, string.Create(CultureInfo.InvariantCulture, $"1 to {MostDimensions} coordinates."));
        }

        Dimensions = dimensions;
        _directions = [.. Enumerable.Range(0, dimensions).Select(DirectionNumbers)];

        // Multiples of the golden ratio's fraction: any fixed numbers serve.
        _shift = [.. Enumerable.Range(1, dimensions).Select(j => shifted ? unchecked((uint)j * 0x9E3779B9u) : 0)];
    }

    /// <summary>Number of coordinates.</summary>
    public int Dimensions { get; }

    /// <summary>One point; every coordinate lies strictly between 0 and 1 when shifted, else from 0 to below 1.</summary>
    /// <param name="index">Number of the point, from 0.</param>
    /// <param name="point">Receives the coordinates, without unit.</param>
    public void Point(uint index, Span<double> point)
    {
        for (int j = 0; j < Dimensions; j++)
        {
            uint bits = _shift[j];
            for (uint left = index; left != 0; left &= left - 1)
            {
                bits ^= _directions[j][BitOperations.TrailingZeroCount(left)];
            }

            // The middle of the cell of 2^-32 once shifted, so that no quantile is infinite.
            point[j] = (bits + (_shift[j] == 0 ? 0.0 : 0.5)) / 4294967296.0;
        }
    }

    private static uint[] DirectionNumbers(int dimension)
    {
        var v = new uint[Bits];
        if (dimension == 0)
        {
            for (int k = 0; k < Bits; k++)
            {
                v[k] = 1u << (Bits - 1 - k);
            }

            return v;
        }

        (int s, uint a, uint[] m) = Polynomials[dimension - 1];
        for (int k = 0; k < s; k++)
        {
            v[k] = m[k] << (Bits - 1 - k);
        }

        for (int k = s; k < Bits; k++)
        {
            v[k] = v[k - s] ^ (v[k - s] >> s);
            for (int i = 1; i < s; i++)
            {
                if ((a >> (s - 1 - i) & 1) != 0)
                {
                    v[k] ^= v[k - i];
                }
            }
        }

        return v;
    }
}
