namespace DeepSourceCheck.Core.Results;

/// <summary>SNR of one trial over the cortex, for sources along the cortex's own normal, by depth and by angle.</summary>
/// <param name="ByDepth">By depth below the inner skull [m], shallow first; bins without a point are left out.</param>
/// <param name="ByAngle">By angle between the cortex's normal and that of the inner skull [rad], radial first; bins without a point are left out.</param>
/// <param name="UprightByDepth">By depth, points of 60 degrees and more alone: depth and angle go together in a folded cortex, and here the angle plays no part.</param>
/// <param name="WithoutNormal">Points that are in no bin: which way the cortex faces there is not known.</param>
public sealed record CorticalProfile(IReadOnlyList<ProfileBin> ByDepth, IReadOnlyList<ProfileBin> ByAngle, IReadOnlyList<ProfileBin> UprightByDepth, int WithoutNormal);

/// <summary>The points whose depth or angle lies between two values.</summary>
/// <param name="From">Lower edge, which belongs to the bin: depth [m] or angle [rad].</param>
/// <param name="To">Upper edge, which belongs to the next: depth [m] or angle [rad].</param>
/// <param name="Points">Their number.</param>
/// <param name="Figures">One a modality and measure.</param>
public sealed record ProfileBin(double From, double To, int Points, IReadOnlyList<ProfileFigure> Figures);

/// <summary>SNR of one trial of the points of a bin.</summary>
/// <param name="Modality">EEG or MEG.</param>
/// <param name="Measure">`channel-mean` or `best-channel`.</param>
/// <param name="SnrDb">Percentiles over the points [dB].</param>
public sealed record ProfileFigure(Modality Modality, string Measure, Percentiles SnrDb);
