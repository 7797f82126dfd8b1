namespace DeepSourceCheck.Core.Leadfields;

/// <summary>How leadfields came about, for whoever checks a figure that stands on them.</summary>
/// <param name="Eeg">What an EEG value is, with its source.</param>
/// <param name="Meg">What a MEG value is, with its source.</param>
/// <param name="Details">One sentence with the figures of this run, such as grid and residual; null where there is nothing to add.</param>
public sealed record LeadfieldMethod(string Eeg, string Meg, string? Details = null);
