namespace DeepSourceCheck.Report.Answers;

/// <summary>The cautions that stand in every report, gravest first.</summary>
public static class Cautions
{
    /// <summary>A heading and the caution in full.</summary>
    public static IReadOnlyList<(string Heading, string Text)> All { get; } =
    [
        ("Detected is not located.",
            "The counts say when a response stands out from noise, not where it comes from. Activity elsewhere can give the same signal at the same sensors; this report does not bound the position."),
        ("Not seen is no evidence of absence.",
            "A predicted non-detection, or a recording without a response, does not show that a response, a structure or a lesion is absent. The smallest source beside each verdict says what would have been missed."),
        ("Detection is not clinical waveform quality.",
            "The target says how far the peak stands above residual noise. Reading latencies or comparing sides in practice takes more trials and replication."),
        ("A planning aid, no medical device.",
            "It makes no diagnosis and supports no decision about a patient. It computes from models and stated assumptions and has not been validated for clinical use."),
        ("People differ, and that is not modelled.",
            "Hearing loss, age, sedation and medication change responses and noise; they do not enter. Neither do movement, blinks, muscle tone beyond the stated noise, nor failed recordings beyond the stated rejection."),
        ("Local rules and licensed practice come first.",
            "Stimulus levels, exposure and equipment limits, and every decision about a participant or patient, follow local rules, the ethics approval and the judgement of licensed staff."),
    ];

    /// <summary>The sentence that stands on the first screen.</summary>
    public const string InOneLine = "Planning aid, no medical device. Not seen is no evidence of absence.";
}
