namespace DeepSourceCheck.Core.Results;

/// <summary>An input file.</summary>
/// <param name="Path">As the study names it.</param>
/// <param name="Sha256">Lower-case hexadecimal digest of its bytes.</param>
public sealed record InputFile(string Path, string Sha256);
