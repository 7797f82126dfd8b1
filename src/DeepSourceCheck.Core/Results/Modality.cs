namespace DeepSourceCheck.Core.Results;

/// <summary>EEG, MEG or both together.</summary>
public enum Modality
{
    /// <summary>`EEG`.</summary>
    Eeg,

    /// <summary>`MEG`.</summary>
    Meg,

    /// <summary>`EEG+MEG`.</summary>
    Both,
}
