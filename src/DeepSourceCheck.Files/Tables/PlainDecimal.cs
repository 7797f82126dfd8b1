using System.Buffers;
using System.Text;

namespace DeepSourceCheck.Files.Tables;

/// <summary>
/// Numbers as tables mostly hold them: a sign, digits, a point, digits. With at most 15 digits the whole number m and the power of ten are exact doubles, so that m/10^k is rounded once:
/// the same double that a full parser gives.
/// </summary>
internal static class PlainDecimal
{
    private const int MostDigits = 15;

    private static readonly double[] PowersOfTen = [1, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15];

    // Longer texts have more digits than are parsed here, or are no numbers.
    private const int LongestText = MostDigits + 2;

    /// <summary>False for every other way of writing a number, which is then left to the full parser.</summary>
    public static bool TryParse(ReadOnlySpan<char> text, out double value)
    {
        value = 0;
        Span<byte> ascii = stackalloc byte[LongestText];
        return text.Length <= LongestText && Ascii.FromUtf16(text, ascii, out int written) == OperationStatus.Done && TryParse(ascii[..written], out value);
    }

    /// <summary>Likewise of UTF-8.</summary>
    public static bool TryParse(ReadOnlySpan<byte> text, out double value)
    {
        value = 0;
        int at = text.Length > 0 && text[0] == '-' ? 1 : 0, digits = 0, decimals = 0;
        bool negative = at == 1, point = false;
        long whole = 0;
        for (; at < text.Length; at++)
        {
            uint digit = (uint)(text[at] - '0');
            if (digit <= 9)
            {
                whole = 10 * whole + digit;
                digits++;
                decimals += point ? 1 : 0;
            }
            else if (text[at] == '.' && !point && digits > 0)
            {
                point = true;
            }
            else
            {
                return false;
            }

            if (digits > MostDigits)
            {
                return false;
            }
        }

        if (digits == 0 || (point && decimals == 0))
        {
            return false;
        }

        value = whole / PowersOfTen[decimals];
        value = negative ? -value : value;
        return true;
    }
}
