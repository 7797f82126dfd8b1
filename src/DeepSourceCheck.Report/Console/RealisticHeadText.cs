using System.Text;

using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Report.Answers;

namespace DeepSourceCheck.Report.Console;

/// <summary>The end of what `why` prints: what a realistic head changes at the region.</summary>
public static class RealisticHeadText
{
    private const int MeasureWidth = 18, ChangeWidth = 28;

    /// <summary>The text with an empty line before it; empty where there is nothing to say.</summary>
    /// <param name="assessment">The run.</param>
    /// <param name="region">The region; several library regions where it is made of regions that act together.</param>
    /// <param name="unicode">False: ASCII only.</param>
    public static string Of(Assessment assessment, RegionResult region, bool unicode)
    {
        StringBuilder text = new();
        foreach (RealisticHeadEffect effect in region.RealisticHeads)
        {
            text.Append('\n').Append(WhyText.Wrap($"What a realistic head changes: {effect.Region}", 0));
            text.Append(WhyText.Wrap(RealisticHead.Meaning + ":", 0));
            text.Append("  ").Append("".PadRight(MeasureWidth)).Append("invented head".PadRight(ChangeWidth)).Append("one real head\n");
            foreach (RealisticHeadChange change in RealisticHead.Changes(effect))
            {
                text.Append("  ").Append(RealisticHead.Words(change).PadRight(MeasureWidth))
                    .Append(RealisticHead.Change(change.Phantom).PadRight(ChangeWidth)).Append(RealisticHead.Change(change.RealHead)).Append('\n');
            }

            text.Append(WhyText.Wrap(RealisticHead.Directions(effect), 0));
        }

        if (region.RealisticHeads.Count > 0)
        {
            text.Append(WhyText.Wrap(RealisticHead.Caution(assessment, region.RealisticHeads), 0));
        }
        else if (RealisticHead.None(assessment, region) is { } none)
        {
            text.Append('\n').Append(WhyText.Wrap("What a realistic head changes", 0)).Append(WhyText.Wrap(none, 0));
        }

        IReadOnlyList<string> own = text.Length > 0 ? RealisticHead.Own(assessment) : [];
        for (int k = 0; k < own.Count; k++)
        {
            // What is to be written stands whole, to be copied.
            text.Append(k == 0 ? WhyText.Wrap(own[k], 0) : $"  {own[k]}\n");
        }

        return WhyText.Plain(text.ToString(), unicode);
    }
}
