namespace DeepSourceCheck.Core.Studies;

/// <summary>A frequency band.</summary>
/// <param name="Low">Lower edge [Hz].</param>
/// <param name="High">Upper edge [Hz].</param>
public readonly record struct Band(double Low, double High)
{
    /// <summary>Width [Hz].</summary>
    public double Width => High - Low;
}
