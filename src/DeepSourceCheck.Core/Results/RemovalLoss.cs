using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Results;

/// <summary>What taking the room's spatial terms out does to one region's MEG: medians over its dipoles (and the direction's set), differences in dB.</summary>
/// <param name="Direction">The direction that was read.</param>
/// <param name="MatchedFilterDb">Change of the matched filter's power against the same array in a room without noise [dB]; not positive: signal that went out with the terms.</param>
/// <param name="BestChannelDb">The same of the best channel [dB].</param>
/// <param name="MatchedFilterAgainstLeftInDb">Change against the stated room with its terms left in [dB]; not positive, since the filter takes them out itself, and better.</param>
/// <param name="BestChannelAgainstLeftInDb">The same of the best channel [dB]: what removal gains a single trace.</param>
public sealed record RemovalLoss(
    DirectionName Direction, double MatchedFilterDb, double BestChannelDb, double MatchedFilterAgainstLeftInDb, double BestChannelAgainstLeftInDb);
