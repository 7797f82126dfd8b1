using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Tests.Core.Studies;

public class NearestNameTests
{
    [Theory]
    [InlineData("", "", 0)]
    [InlineData("abc", "abc", 0)]
    [InlineData("ABC", "abc", 0)]
    [InlineData("abc", "", 3)]
    [InlineData("kitten", "sitting", 3)] // Levenshtein's textbook pair
    [InlineData("moment", "momnet", 1)]
    [InlineData("ca", "abc", 3)] // the restricted form: no edit inside a swap
    public void Distance_CountsEdits(string a, string b, int expected)
    {
        Assert.Equal(expected, NearestName.Distance(a, b));
        Assert.Equal(expected, NearestName.Distance(b, a));
    }

    [Fact]
    public void Nearest_IsTheFirstOfEquals_AndNoneForAnOverlongName()
    {
        Assert.Equal("ab", NearestName.Of("ax", ["ab", "ac"]));
        Assert.Null(NearestName.Of(new string('a', 101), ["ab"]));
        Assert.Null(NearestName.Of("ax", []));
    }
}
