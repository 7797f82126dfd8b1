using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Tests.Files.Studies;

/// <summary>Keys of the language that the program does not act on would be refused, never read and ignored.</summary>
public class NotSupportedYetTests
{
    [Fact]
    public void EveryKeyShapeAndWord_IsActedOn() => Assert.Empty(StudyKeys.All
        .Where(k => k.NotYet is not null || k.ShapesNotYet.Count > 0 || k.Shapes.OfType<ChoiceShape>().Any(c => c.NotYet.Count > 0)).Select(k => k.Path));
}
