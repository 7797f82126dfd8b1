using System.Globalization;

using CsCheck;

using DeepSourceCheck.Files.Tables;

namespace DeepSourceCheck.Tests.Files.Tables;

/// <summary>The quick way to read plain decimal numbers, against the framework's parser.</summary>
public class PlainDecimalTests
{
    [Fact]
    public void PlainNumbers_AreTheDoublesOfTheFullParser() =>
        Gen.Long[-999_999_999_999_999, 999_999_999_999_999].Select(Gen.Int[0, 15], Gen.Int[0, 14]).Sample((n, decimals, shorter) =>
        {
            decimal number = n / (long)Math.Pow(10, shorter) / (decimal)Math.Pow(10, decimals);
            string text = Math.Round(number, 15 - Math.Min(15, 1 + (int)Math.Log10((double)Math.Abs(number) + 1))).ToString(CultureInfo.InvariantCulture);
            if (PlainDecimal.TryParse(text, out double value))
            {
                double expected = double.Parse(text, NumberStyles.Float, CultureInfo.InvariantCulture);
                Assert.Equal(BitConverter.DoubleToInt64Bits(expected), BitConverter.DoubleToInt64Bits(value));
            }
            else
            {
                Assert.True(text.Count(char.IsDigit) > 15, $"'{text}' is plain and was not taken");
            }
        }, seed: "0000KeqOG7K1", iter: 20_000);

    [Theory]
    [InlineData("0", 0.0)]
    [InlineData("-0", -0.0)]
    [InlineData("-0.0", -0.0)]
    [InlineData("007.50", 7.5)]
    [InlineData("0.1", 0.1)]
    [InlineData("999999999999999", 999999999999999.0)]
    public void PlainNumbers_AreTaken(string text, double expected)
    {
        Assert.True(PlainDecimal.TryParse(text, out double value));
        Assert.Equal(BitConverter.DoubleToInt64Bits(expected), BitConverter.DoubleToInt64Bits(value));
    }

    [Theory]
    [InlineData("")]
    [InlineData("-")]
    [InlineData(".5")]
    [InlineData("5.")]
    [InlineData("1e3")]
    [InlineData("+1")]
    [InlineData("--1")]
    [InlineData("1.2.3")]
    [InlineData("1,5")]
    [InlineData("NaN")]
    [InlineData("1234567890123456")]
    [InlineData("\u0661")]
    public void OtherForms_AreLeftToTheFullParser(string text) => Assert.False(PlainDecimal.TryParse(text, out _));
}
