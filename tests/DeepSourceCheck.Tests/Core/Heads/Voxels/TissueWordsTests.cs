using DeepSourceCheck.Core.Heads.Voxels;

namespace DeepSourceCheck.Tests.Core.Heads.Voxels;

/// <summary>What names of tissues say.</summary>
public class TissueWordsTests
{
    [Theory]
    [InlineData("scalp", TissueKind.Scalp)]
    [InlineData("Skin", TissueKind.Scalp)]
    [InlineData("soft tissue", TissueKind.Scalp)]
    [InlineData("subcutaneous fat", TissueKind.Scalp)]
    [InlineData("eyes", TissueKind.Scalp)]
    [InlineData("skull", TissueKind.Skull)]
    [InlineData("cortical bone", TissueKind.Skull)]
    [InlineData("soft bone", TissueKind.Skull)]
    [InlineData("skull-spongy", TissueKind.Skull)]
    [InlineData("spongiosa", TissueKind.Skull)]
    [InlineData("anterior fontanelle", TissueKind.Skull)]
    [InlineData("CSF", TissueKind.Csf)]
    [InlineData("cerebrospinal fluid", TissueKind.Csf)]
    [InlineData("lateral ventricles", TissueKind.Csf)]
    [InlineData("grey", TissueKind.Grey)]
    [InlineData("gray_matter", TissueKind.Grey)]
    [InlineData("GM", TissueKind.Grey)]
    [InlineData("brain", TissueKind.Grey)]
    [InlineData("brainstem", TissueKind.Grey)]
    [InlineData("cortex", TissueKind.Grey)]
    [InlineData("deep nuclei", TissueKind.Grey)]
    [InlineData("cerebellum", TissueKind.Grey)]
    [InlineData("white", TissueKind.White)]
    [InlineData("white matter of the cerebellum", TissueKind.White)]
    [InlineData("WM", TissueKind.White)]
    [InlineData("air", TissueKind.Air)]
    [InlineData("air sinus", TissueKind.Air)]
    public void Name_TellsTheKind(string name, TissueKind kind) => Assert.Equal(kind, TissueWords.KindOf(name));

    [Theory]
    [InlineData("lesion")]
    [InlineData("hair")]
    [InlineData("label 3")]
    [InlineData("gmx")]
    [InlineData("7")]
    public void UnknownName_TellsNothing(string name) => Assert.Null(TissueWords.KindOf(name));

    [Fact]
    public void EveryWordThatMessagesOffer_IsUnderstood() =>
        Assert.All(TissueWords.Understood.Split([',', ';', ' '], StringSplitOptions.RemoveEmptyEntries), word => Assert.NotNull(TissueWords.KindOf(word)));
}
