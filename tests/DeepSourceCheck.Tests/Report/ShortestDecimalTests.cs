using System.Globalization;
using System.Text;

using DeepSourceCheck.Report.Tables;

namespace DeepSourceCheck.Tests.Report;

/// <summary>Numbers as text, against the framework's own shortest round-trip text: another implementation of the same definition.</summary>
public class ShortestDecimalTests
{
    [Fact]
    public void Text_OfRandomBits_IsTheFrameworks()
    {
        var random = new Random(5);
        for (int k = 0; k < 400_000; k++)
        {
            Same(BitConverter.Int64BitsToDouble(random.NextInt64(long.MinValue, long.MaxValue)));
        }
    }

    [Fact]
    public void Text_OfResults_IsTheFrameworks()
    {
        var random = new Random(6);
        for (int k = 0; k < 100_000; k++)
        {
            Same(random.NextDouble());
            Same(-60 * random.NextDouble());
            Same(1e9 * random.NextDouble());
            Same(Math.Round(100 * random.NextDouble(), random.Next(8)));
            Same(random.Next());
            Same(random.NextInt64() >> random.Next(63));
        }
    }

    [Fact]
    public void Text_OfEveryPowerAndItsNeighbours_IsTheFrameworks()
    {
        // At powers of two the neighbour below is half as far away; around powers of ten digits, zeros and the exponent change.
        for (int exponent = -1074; exponent <= 1023; exponent++)
        {
            Around(Math.ScaleB(1, exponent));
        }

        for (int exponent = -323; exponent <= 308; exponent++)
        {
            Around(double.Parse("1e" + exponent.ToString(CultureInfo.InvariantCulture), CultureInfo.InvariantCulture));
            Around(double.Parse("9.5e" + exponent.ToString(CultureInfo.InvariantCulture), CultureInfo.InvariantCulture));
        }
    }

    [Theory]
    [InlineData(0.0, "0")]
    [InlineData(0.0001, "0.0001")]
    [InlineData(0.00001, "1E-05")]
    [InlineData(-1.5e-7, "-1.5E-07")]
    [InlineData(123456789012345.0, "123456789012345")]
    [InlineData(1e16, "10000000000000000")]
    [InlineData(1e17, "1E+17")]
    [InlineData(2.9802322387695312E-08, "2.9802322387695312E-08")]  // 2^-25: one digit less belongs to the neighbour below, which is half as far away
    [InlineData(12345678901234568.0, "12345678901234568")]
    [InlineData(double.Epsilon, "5E-324")]
    [InlineData(double.MaxValue, "1.7976931348623157E+308")]
    [InlineData(-2.2250738585072014e-308, "-2.2250738585072014E-308")]
    [InlineData(9007199254740993.0, "9007199254740992")]
    public void Text_OfKnownNumbers_IsAsWritten(double value, string expected) => Assert.Equal(expected, Text(value));

    [Fact]
    public void Text_OfMinusZero_HasNoSign() => Assert.Equal("0", Text(double.NegativeZero));

    private static void Around(double value)
    {
        Same(value);
        Same(Math.BitIncrement(value));
        Same(Math.BitDecrement(value));
    }

    private static void Same(double value)
    {
        if (!double.IsFinite(value))
        {
            return;
        }

        string framework = (value + 0.0).ToString("R", CultureInfo.InvariantCulture), text = Text(value);   // adding 0 turns -0 into 0
        Assert.Equal(value, double.Parse(text, CultureInfo.InvariantCulture));
        if (framework != text)
        {
            Assert.NotEqual(value, double.Parse(framework, CultureInfo.InvariantCulture));      // the framework's own text is another number's
        }
    }

    private static string Text(double value)
    {
        Span<byte> text = stackalloc byte[ShortestDecimal.Longest];
        return Encoding.ASCII.GetString(text[..ShortestDecimal.Write(value, text)]);
    }
}
