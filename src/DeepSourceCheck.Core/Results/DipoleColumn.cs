namespace DeepSourceCheck.Core.Results;

/// <summary>A column of SNR in dipoles.csv.</summary>
/// <param name="Modality">EEG, MEG or both.</param>
/// <param name="Direction">`quasi-radial` and so on, as results write it.</param>
/// <param name="Measure">Measure's name.</param>
public sealed record DipoleColumn(Modality Modality, string Direction, string Measure)
{
    /// <summary>`modality|direction|measure`.</summary>
    public string Name => $"{Names.Of(Modality)}|{Direction}|{Measure}";
}
