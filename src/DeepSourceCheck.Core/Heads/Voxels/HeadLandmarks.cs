using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Heads.Voxels;

/// <summary>One of the four points from which electrode sites are measured.</summary>
/// <param name="Name">Nz, Iz, LPA or RPA.</param>
/// <param name="Position">Place on the scalp [m].</param>
/// <param name="Given">True where the study gives it, false where it was found.</param>
/// <param name="Uncertainty">How far it may be off [m], one standard deviation; 0 where given.</param>
/// <param name="MovedBy">How far a given point was moved to reach the scalp [m]; 0 where found.</param>
public sealed record Landmark(string Name, Vec3 Position, bool Given, double Uncertainty, double MovedBy);

/// <summary>Nasion, inion and the two preauricular points on a scalp.</summary>
/// <param name="Nasion">Nz, the root of the nose.</param>
/// <param name="Inion">Iz, the bump at the back of the head.</param>
/// <param name="Left">LPA, in front of the left ear.</param>
/// <param name="Right">RPA, in front of the right ear.</param>
/// <param name="Warnings">What the user must know.</param>
public sealed record HeadLandmarks(Landmark Nasion, Landmark Inion, Landmark Left, Landmark Right, IReadOnlyList<string> Warnings)
{
    /// <summary>The names in their order.</summary>
    public static IReadOnlyList<string> Names { get; } = ["Nz", "Iz", "LPA", "RPA"];

    /// <summary>The four in the order Nz, Iz, LPA, RPA.</summary>
    public IReadOnlyList<Landmark> All => [Nasion, Inion, Left, Right];
}
