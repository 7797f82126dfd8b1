using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Results;

/// <summary>The words by which results and studies name things: the one place where they are spelled.</summary>
public static class Names
{
    /// <summary>Mean over channels of the power ratio.</summary>
    public const string ChannelMean = "channel-mean";

    /// <summary>Largest power ratio over channels.</summary>
    public const string BestChannel = "best-channel";

    /// <summary>The bound that no linear combination of channels exceeds.</summary>
    public const string MatchedFilter = "matched-filter";

    /// <summary>A filter that was built for a displaced place, another head and an estimated covariance.</summary>
    public const string RealisticFilter = "realistic-filter";

    /// <summary>Amplitude against residual rms.</summary>
    public const string AmplitudeRatio = "amplitude_ratio";

    /// <summary>Detection at a false-alarm rate.</summary>
    public const string Detection = "detection";

    /// <summary>Variance of the average over a window against that of its noise.</summary>
    public const string VarianceRatio = "variance_ratio";

    /// <summary>Residual noise of the EEG average.</summary>
    public const string ResidualNoise = "residual_nV";

    /// <summary>`EEG`, `MEG`, `EEG+MEG`.</summary>
    public static string Of(Modality modality) => modality switch
    {
        Modality.Eeg => "EEG",
        Modality.Meg => "MEG",
        _ => "EEG+MEG",
    };

    /// <summary>Direction as results write it.</summary>
    public static string Of(DirectionName direction) => direction switch
    {
        DirectionName.QuasiRadial => "quasi-radial",
        DirectionName.Tangential => "tangential",
        DirectionName.StrongestTangential => "strongest-tangential",
        DirectionName.Isotropic => "isotropic",
        DirectionName.Best => "best",
        _ => "given",
    };

    /// <summary>Coil kind as tables write it.</summary>
    public static string Of(CoilKind kind) => kind switch
    {
        CoilKind.Magnetometer => "magnetometer",
        CoilKind.AxialGradiometer => "axial-gradiometer",
        _ => "planar-gradiometer",
    };

    /// <summary>Rule of a target as studies and results write it.</summary>
    public static string Of(TargetChoice target) => target switch
    {
        AmplitudeRatioChoice => AmplitudeRatio,
        DetectionChoice => Detection,
        VarianceRatioChoice => VarianceRatio,
        _ => ResidualNoise,
    };

    /// <summary>Topography as studies write it.</summary>
    public static string Of(Topography topography) => topography switch
    {
        Topography.Known => "known",
        Topography.Plane => "plane",
        _ => "unknown",
    };

    /// <summary>Spending function as studies write it.</summary>
    public static string Of(Spending spending) => spending == Spending.PocockType ? "pocock-type" : "obrien-fleming-type";

    /// <summary>Grade as results write it.</summary>
    public static string Of(Grade grade) => grade switch
    {
        Grade.Seen => "seen",
        Grade.Memory => "memory",
        _ => "derived",
    };
}
