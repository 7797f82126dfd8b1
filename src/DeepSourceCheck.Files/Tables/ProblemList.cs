using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Tables;

/// <summary>Collects the problems of one file, so that all are reported at once; beyond a few dozen only their number.</summary>
internal sealed class ProblemList(string file)
{
    private const int MostListed = 30;

    private readonly List<InputProblem> _problems = [];
    private int _unlisted;

    /// <summary>The file as the user named it.</summary>
    public string File { get; } = file;

    public bool IsEmpty => _problems.Count == 0;

    /// <summary>Notes a problem; line 0 where there is none, column null likewise.</summary>
    public void Add(int line, string? column, string message)
    {
        if (_problems.Count < MostListed)
        {
            _problems.Add(new(File, line, 0, column, message));
        }
        else
        {
            _unlisted++;
        }
    }

    /// <exception cref="InputException">Something was noted.</exception>
    public void ThrowIfAny()
    {
        if (_problems.Count > 0)
        {
            InputProblem[] more = _unlisted > 0 ? [new(File, 0, 0, null, $"and {_unlisted:N0} further problems of this file")] : [];
            throw new InputException([.. _problems, .. more]);
        }
    }
}
