using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Results;

/// <summary>What other active sources leave of a response in one region.</summary>
/// <param name="Direction">The direction that was read: the verdict's.</param>
/// <param name="Dipoles">Dipoles of the region that were read.</param>
/// <param name="Sources">The other sources, each with how much its fields resemble the response's.</param>
/// <param name="Readings">With all of them active: the verdicts' measures and the matched filters.</param>
public sealed record CompetitorsResult(DirectionName Direction, int Dipoles, IReadOnlyList<CompetitorSource> Sources, IReadOnlyList<CompetitorReading> Readings);

/// <summary>One other source.</summary>
/// <param name="Region">Its region.</param>
/// <param name="Moment">Rms of its moment [A m].</param>
/// <param name="Dipoles">Dipoles that were taken.</param>
/// <param name="Overlaps">One entry a modality.</param>
public sealed record CompetitorSource(string Region, double Moment, int Dipoles, IReadOnlyList<FieldOverlap> Overlaps);

/// <summary>How alike the fields of a response and another source are, in units of the noise.</summary>
/// <param name="Modality">EEG, MEG or both.</param>
/// <param name="Patterns">Patterns that hold 99 % of the other source's power.</param>
/// <param name="AngleDeg">Angle between the response's field and these patterns [deg], over dipoles and directions; 0: the same topography.</param>
/// <param name="PrincipalAnglesDeg">Principal angles between the response's own main patterns and these [deg], smallest first.</param>
/// <param name="PowerLeftDb">Power of the matched filter with this source alone active, against without [dB].</param>
public sealed record FieldOverlap(Modality Modality, int Patterns, Percentiles AngleDeg, IReadOnlyList<double> PrincipalAnglesDeg, Percentiles PowerLeftDb);

/// <summary>One measure with all other sources active.</summary>
/// <param name="Modality">EEG, MEG or both.</param>
/// <param name="Measure">Measure.</param>
/// <param name="IsVerdict">Whether a verdict stands on it.</param>
/// <param name="Rms">What the other sources add to the noise of the reading [unit of the peak]; null for filters and pairs.</param>
/// <param name="PowerLeftDb">Power with against without them [dB], over dipoles and directions.</param>
/// <param name="SnrDb">Power SNR of one trial with them [dB].</param>
/// <param name="Counts">Trials by rule.</param>
public sealed record CompetitorReading(
    Modality Modality, string Measure, bool IsVerdict, PeakAmplitude? Rms, Percentiles PowerLeftDb, Percentiles SnrDb, IReadOnlyList<CompetitorCount> Counts);

/// <summary>Trials of one rule with other sources active.</summary>
/// <param name="Rule">Rule.</param>
/// <param name="Without">Median without them, from the same dipoles; null where out of reach.</param>
/// <param name="Trials">With them.</param>
/// <param name="Chain">From the median power to the trials: what `why` prints.</param>
public sealed record CompetitorCount(string Rule, long? Without, CountPercentiles Trials, IReadOnlyList<DerivedNumber> Chain);

/// <summary>How well one dipole in a region could be placed.</summary>
/// <param name="Trials">Trials that the bound stands on: those of the session.</param>
/// <param name="Direction">Direction of the moment.</param>
/// <param name="Dipoles">Dipoles that were read.</param>
/// <param name="HeadRadius">Radius beyond which a place is not known [m]; null where the head has none.</param>
/// <param name="Bounds">EEG, MEG, both, as far as the study has them; empty with a reason.</param>
/// <param name="Reason">Why there is no bound; null where there is one.</param>
public sealed record LocationResult(long? Trials, DirectionName Direction, int Dipoles, double? HeadRadius, IReadOnlyList<LocationReading> Bounds, string? Reason);

/// <summary>Location in one modality.</summary>
/// <param name="Modality">EEG, MEG or both.</param>
/// <param name="Bound">Cramer-Rao bound, sqrt of the trace [m], percentiles over dipoles and directions; null where unbounded.</param>
/// <param name="ModelError">What the model of the head adds [m].</param>
/// <param name="Error">sqrt(bound^2 + model error^2) [m].</param>
/// <param name="Localisable">False where the median bound is unbounded or beyond the head's radius.</param>
/// <param name="Chain">Lines for `why`.</param>
public sealed record LocationReading(Modality Modality, Percentiles Bound, double ModelError, Percentiles Error, bool Localisable, IReadOnlyList<DerivedNumber> Chain);

/// <summary>Which electrodes carry a response.</summary>
/// <param name="Direction">Direction of the moment.</param>
/// <param name="Dipoles">Dipoles that were read.</param>
/// <param name="Steps">The electrodes in the order of the greedy choice.</param>
/// <param name="Derivations">The best differences of two electrodes, best first.</param>
public sealed record SensorChoiceResult(DirectionName Direction, int Dipoles, IReadOnlyList<ElectrodeStep> Steps, IReadOnlyList<ElectrodePair> Derivations);

/// <summary>A set of electrodes: this one and all before it.</summary>
/// <param name="Electrode">Name.</param>
/// <param name="SnrDb">Median power SNR of the set's matched filter in one trial [dB]; null for the first electrode alone.</param>
/// <param name="Trials">Median trials by rule, in the order of the targets; null where out of reach.</param>
public sealed record ElectrodeStep(string Electrode, double? SnrDb, IReadOnlyList<(string Rule, long? Trials)> Trials);

/// <summary>A difference of two electrodes.</summary>
/// <param name="Name">`A-B`.</param>
/// <param name="SnrDb">Median power SNR in one trial [dB].</param>
/// <param name="Trials">Median trials by rule.</param>
public sealed record ElectrodePair(string Name, double? SnrDb, IReadOnlyList<(string Rule, long? Trials)> Trials);
