using System.Numerics;

namespace DeepSourceCheck.Report.Tables;

// ShortestDecimal.cs - the shortest decimal text that reads back to the same double, and of several the one nearest to it; straight into UTF-8.
//   v = c 2^q. Every decimal strictly between the midpoints to v's neighbours reads back to v (on a midpoint itself where c is even: ties go to even).
//   With 10^k just below the width of that interval, it holds one or two multiples of 10^k and at most one of 10^(k+1): the candidates are
//   s 10^k <= v < (s + 1) 10^k and the multiples of ten on both sides. v and both midpoints are held against them as products of four times their
//   significand with 10^-k to 128 bits, rounded to odd: the sticky last bit keeps every comparison exact.
//   Layout: positional for decimal exponents from -4 to 16, else d.dddE+dd, as in the text that .NET gives a double by default.
// Source: Giulietti (2020), The Schubfach way to render doubles; the number of bits that suffices is proved there (from memory).
// The plain twin is the framework's double.ToString("R"), with which tests compare random bits and every awkward kind.
// (It misses at two powers of two, 2^-25 among them, where its shorter text belongs to the neighbour below: there the text here is longer, and reads back.)

/// <summary>Shortest round-trip text of doubles.</summary>
internal static class ShortestDecimal
{
    /// <summary>Longest text: sign, 17 digits, point, E-308; or sign, zero, point, four zeros, 17 digits.</summary>
    public const int Longest = 25;

    private const int SmallestPower = -292, LargestPower = 324;
    private const int MostPositionalDigits = 17, MostLeadingZeros = 4;

    // 10^k scaled to 128 bits, rounded up by at most one unit; computed when first asked for. Halves are written once with equal values: no lock is needed.
    private static readonly UInt128[] Powers = new UInt128[LargestPower - SmallestPower + 1];
    private static readonly bool[] Ready = new bool[Powers.Length];

    private static ReadOnlySpan<byte> Pairs =>
        "00010203040506070809101112131415161718192021222324252627282930313233343536373839404142434445464748495051525354555657585960616263646566676869707172737475767778798081828384858687888990919293949596979899"u8;

    /// <summary>Writes a finite number; minus zero as 0.</summary>
    /// <param name="value">The number.</param>
    /// <param name="text">At least <see cref="Longest"/> bytes.</param>
    /// <returns>Bytes written.</returns>
    public static int Write(double value, Span<byte> text)
    {
        if (value == 0)
        {
            text[0] = (byte)'0';
            return 1;
        }

        int n = 0;
        if (value < 0)
        {
            text[n++] = (byte)'-';
        }

        (ulong digits, int exponent) = Shortest(Math.Abs(value));
        while (digits % 10 == 0)
        {
            digits /= 10;
            exponent++;
        }

        Span<byte> figures = stackalloc byte[20];
        int first = Figures(digits, figures);
        return n + Lay(figures[first..], exponent, text[n..]);
    }

    /// <summary>Digits d and exponent k of the shortest d 10^k; d may end in zeros.</summary>
    private static (ulong Digits, int Exponent) Shortest(double value)
    {
        ulong bits = BitConverter.DoubleToUInt64Bits(value), fraction = bits & ((1UL << 52) - 1);
        int biased = (int)(bits >> 52);
        ulong c = biased == 0 ? fraction : fraction | (1UL << 52);
        int q = biased == 0 ? -1074 : biased - 1075;
        bool narrowBelow = fraction == 0 && biased > 1;         // the neighbour below a power of two is only half as far
        ulong odd = c & 1;
        int k = FloorLog10(q, narrowBelow), shift = q + FloorLog2OfPower(-k) + 1;
        UInt128 power = Power(-k);
        ulong middle = 4 * c, low = Product(power, (narrowBelow ? middle - 1 : middle - 2) << shift), high = Product(power, (middle + 2) << shift);
        ulong v = Product(power, middle << shift), s = v >> 2;
        if (s >= 10)
        {
            ulong below = s / 10 * 10, above = below + 10;
            bool belowIn = low + odd <= below << 2, aboveIn = (above << 2) + odd <= high;
            if (belowIn != aboveIn)
            {
                return (belowIn ? below : above, k);
            }
        }

        bool downIn = low + odd <= s << 2, upIn = ((s + 1) << 2) + odd <= high;
        if (downIn != upIn)
        {
            return (downIn ? s : s + 1, k);
        }

        ulong half = (s << 2) + 2;
        return (v < half || (v == half && (s & 1) == 0) ? s : s + 1, k);
    }

    // floor(log10(2^q)), or of three quarters of it: exact for every exponent of a double.
    private static int FloorLog10(int q, bool threeQuarters) => (int)((q * 1262611L - (threeQuarters ? 524031L : 0)) >> 22);

    // floor(log2(10^k))
    private static int FloorLog2OfPower(int k) => (int)((k * 1741647L) >> 19);

    // The integer part of power times factor over 2^128, its last bit set where anything is left over.
    private static ulong Product(UInt128 power, ulong factor)
    {
        ulong carried = Math.BigMul((ulong)power, factor, out _), high = Math.BigMul((ulong)(power >> 64), factor, out ulong low);
        ulong sum = low + carried;
        high += sum < low ? 1UL : 0;
        return high | (sum > 1 ? 1UL : 0);
    }

    private static UInt128 Power(int k)
    {
        int at = k - SmallestPower;
        if (!Volatile.Read(ref Ready[at]))
        {
            Powers[at] = Compute(k);
            Volatile.Write(ref Ready[at], true);
        }

        return Powers[at];
    }

    // 10^k 2^(127 - floor(log2(10^k))), rounded down, plus one: between 2^127 and 2^128.
    private static UInt128 Compute(int k)
    {
        int shift = 127 - FloorLog2OfPower(k);
        BigInteger ten = BigInteger.Pow(10, Math.Abs(k));
        BigInteger scaled = k >= 0
            ? shift >= 0 ? ten << shift : ten >> -shift
            : (BigInteger.One << shift) / ten;
        bool exact = k >= 0 && (shift >= 0 || (scaled << -shift) == ten);
        return (UInt128)scaled + (exact ? UInt128.Zero : UInt128.One);
    }

    // Decimal figures at the end of the span; returns where they begin.
    private static int Figures(ulong digits, Span<byte> figures)
    {
        int n = figures.Length;
        while (digits >= 100)
        {
            ulong rest = digits / 100;
            Pairs.Slice(2 * (int)(digits - 100 * rest), 2).CopyTo(figures[(n -= 2)..]);
            digits = rest;
        }

        if (digits >= 10)
        {
            Pairs.Slice(2 * (int)digits, 2).CopyTo(figures[(n -= 2)..]);
        }
        else
        {
            figures[--n] = (byte)('0' + digits);
        }

        return n;
    }

    // Figures times ten to the exponent.
    private static int Lay(ReadOnlySpan<byte> figures, int exponent, Span<byte> text)
    {
        int count = figures.Length, point = count + exponent;   // the value is 0.figures times ten to this
        if (point > MostPositionalDigits || point < 1 - MostLeadingZeros)
        {
            return Scientific(figures, point - 1, text);
        }

        if (point <= 0)
        {
            "0.0000"u8[..(2 - point)].CopyTo(text);
            figures.CopyTo(text[(2 - point)..]);
            return 2 - point + count;
        }

        if (point >= count)
        {
            figures.CopyTo(text);
            text[count..point].Fill((byte)'0');
            return point;
        }

        figures[..point].CopyTo(text);
        text[point] = (byte)'.';
        figures[point..].CopyTo(text[(point + 1)..]);
        return count + 1;
    }

    private static int Scientific(ReadOnlySpan<byte> figures, int exponent, Span<byte> text)
    {
        int n = 0;
        text[n++] = figures[0];
        if (figures.Length > 1)
        {
            text[n++] = (byte)'.';
            figures[1..].CopyTo(text[n..]);
            n += figures.Length - 1;
        }

        text[n++] = (byte)'E';
        text[n++] = (byte)(exponent < 0 ? '-' : '+');
        int size = Math.Abs(exponent);
        if (size >= 100)
        {
            text[n++] = (byte)('0' + size / 100);
            size %= 100;
        }

        Pairs.Slice(2 * size, 2).CopyTo(text[n..]);
        return n + 2;
    }
}
