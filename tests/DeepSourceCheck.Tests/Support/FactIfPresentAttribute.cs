namespace DeepSourceCheck.Tests.Support;

/// <summary>A fact that needs something outside the repository; skipped with a stated reason where a path of it is absent.</summary>
[AttributeUsage(AttributeTargets.Method)]
internal sealed class FactIfPresentAttribute : FactAttribute
{
    /// <param name="what">What it is and how it is had, for the reason.</param>
    /// <param name="paths">Files or folders that must all exist.</param>
    public FactIfPresentAttribute(string what, params string[] paths)
    {
        string[] absent = [.. paths.Where(p => !File.Exists(p) && !Directory.Exists(p))];
        if (absent.Length > 0)
        {
            Skip = $"{string.Join(", ", absent)} is not on this machine: {what}";
        }
    }
}
