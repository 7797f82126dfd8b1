namespace DeepSourceCheck.Core.Studies;

/// <summary>Another source that may be active.</summary>
/// <param name="Region">Name of its region, of the study or of the library.</param>
/// <param name="Moment">Rms of its moment over trials [A m].</param>
public sealed record CompetitorChoice(string Region, double Moment);
