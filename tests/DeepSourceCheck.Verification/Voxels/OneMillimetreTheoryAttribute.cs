namespace DeepSourceCheck.Verification.Voxels;

/// <summary>A theory on a grid of 1 mm: about a minute and 3 GB a case, which a machine that builds does not have to spare. Runs where the switch is set, skipped with the reason elsewhere.</summary>
[AttributeUsage(AttributeTargets.Method)]
internal sealed class OneMillimetreTheoryAttribute : TheoryAttribute
{
    private const string Switch = "DEEPSOURCECHECK_ONE_MM";

    public OneMillimetreTheoryAttribute() =>
        Skip = Environment.GetEnvironmentVariable(Switch) == "1" ? null : $"takes about a minute and 3 GB a case; {Switch}=1 runs it";
}
