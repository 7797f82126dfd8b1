namespace DeepSourceCheck.Core.Regions;

/// <summary>
/// What a realistic head changes against layered spheres at one region of the library: figures that were measured once, under conditions of their own
/// (regions/realistic-head.tsv), and say nothing about the head, sensors or noise of any study.
/// </summary>
/// <param name="Region">The library region that they stand for, for instance `thalamus-left`.</param>
/// <param name="MeasuredSide">`left` where the figures of the left side stand for the right one; null where they were measured on the region itself.</param>
/// <param name="Phantom">From the spheres of adult-4 to the invented head.</param>
/// <param name="RealHead">From the same spheres to one labelled real head.</param>
/// <param name="WeakestOverStrongest">MEG's least visible direction on the invented head, as a share of its strongest, median; spheres have none.</param>
/// <param name="WeakestToOutwardDeg">Angle of that direction to the outward one [degrees], median; 0 on spheres.</param>
public sealed record RealisticHeadEffect(
    string Region, string? MeasuredSide, HeadChange Phantom, HeadChange RealHead, double WeakestOverStrongest, double WeakestToOutwardDeg);

/// <summary>Change of the median SNR of one trial from spheres to another head, isotropic direction.</summary>
/// <param name="EegCzMastoids">EEG at Cz-mastoids [dB].</param>
/// <param name="EegBestChannel">EEG, best channel [dB].</param>
/// <param name="MegBestChannel">MEG, best channel [dB].</param>
public sealed record HeadChange(double EegCzMastoids, double EegBestChannel, double MegBestChannel)
{
    /// <summary>Factor by which the number of trials changes: it goes with the inverse of the power SNR.</summary>
    /// <param name="change">Change of SNR [dB].</param>
    public static double TrialsFactor(double change) => Math.Pow(10, -change / 10);
}
