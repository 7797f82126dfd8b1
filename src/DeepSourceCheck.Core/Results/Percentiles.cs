namespace DeepSourceCheck.Core.Results;

/// <summary>Percentiles by linear interpolation, in the unit of their quantity; null where the value is minus infinity or undefined.</summary>
public sealed record Percentiles(double? P05, double? P25, double? P50, double? P75, double? P95);

/// <summary>Percentiles of counts by nearest rank; null where not reachable.</summary>
public sealed record CountPercentiles(long? P05, long? P25, long? P50, long? P75, long? P95);
