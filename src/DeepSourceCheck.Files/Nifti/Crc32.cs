namespace DeepSourceCheck.Files.Nifti;

/// <summary>The cyclic redundancy check of gzip, four bytes a step.</summary>
/// <remarks>Source: RFC 1952, section 8 (polynomial 0xedb88320, reflected); tables for several bytes at a time: Kounavis and Berry 2008, IEEE Trans. Computers 57:1550 (from memory).</remarks>
internal static class Crc32
{
    private const uint Polynomial = 0xedb88320;

    private static readonly uint[][] Tables = MakeTables();

    /// <summary>Checksum of the bytes so far, whose checksum is <paramref name="checksum"/> (0 for none), followed by <paramref name="bytes"/>.</summary>
    public static uint Append(uint checksum, ReadOnlySpan<byte> bytes)
    {
        uint[] t0 = Tables[0], t1 = Tables[1], t2 = Tables[2], t3 = Tables[3];
        uint c = ~checksum;
        int n = 0;
        for (; n + 4 <= bytes.Length; n += 4)
        {
            c ^= (uint)(bytes[n] | bytes[n + 1] << 8 | bytes[n + 2] << 16 | bytes[n + 3] << 24);
            c = t3[c & 0xff] ^ t2[c >> 8 & 0xff] ^ t1[c >> 16 & 0xff] ^ t0[c >> 24];
        }

        for (; n < bytes.Length; n++)
        {
            c = t0[(c ^ bytes[n]) & 0xff] ^ c >> 8;
        }

        return ~c;
    }

    private static uint[][] MakeTables()
    {
        uint[][] tables = [new uint[256], new uint[256], new uint[256], new uint[256]];
        for (uint n = 0; n < 256; n++)
        {
            uint c = n;
            for (int bit = 0; bit < 8; bit++)
            {
                c = (c & 1) != 0 ? Polynomial ^ c >> 1 : c >> 1;
            }

            tables[0][n] = c;
        }

        for (int k = 1; k < 4; k++)
        {
            for (int n = 0; n < 256; n++)
            {
                uint before = tables[k - 1][n];
                tables[k][n] = tables[0][before & 0xff] ^ before >> 8;
            }
        }

        return tables;
    }
}
