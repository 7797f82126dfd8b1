using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Tests.Files.Studies;

/// <summary>Keys of the language that the program does not act on are refused, never read and ignored.</summary>
public class NotSupportedYetTests
{
    [Theory]
    [InlineData("rate_per_s: 11.1", "rate_per_s: 11.1, participants: 20", "protocol.participants")]
    [InlineData("rate_per_s: 11.1", "rate_per_s: 11.1, spread_between_people: 0.3", "protocol.spread_between_people")]
    public void Key_ThatIsNotActedOn_IsRefusedWithWhatToDoInstead(string place, string replacement, string key)
    {
        InputProblem problem = StudyText.Problem(StudyText.Small.With(place, replacement));
        Assert.Equal(key, problem.Key);
        Assert.Matches("not supported yet: .{10,}", problem.Message);
    }

    [Fact]
    public void EveryKeyThatIsNotActedOn_SaysWhatToDoInstead()
    {
        Assert.All(StudyKeys.All.Where(k => k.NotYet is not null), key => Assert.True(key.NotYet!.Length >= 10, key.Path));
        Assert.All(StudyKeys.All.Where(k => k.ShapesNotYet.Count > 0 || k.Shapes.OfType<ChoiceShape>().Any(c => c.NotYet.Count > 0)),
            key => Assert.True(key.InsteadOfShape.Length >= 10, key.Path));
    }
}
