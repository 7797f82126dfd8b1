using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Studies;

/// <summary>What a study is read for.</summary>
public enum Purpose
{
    /// <summary>The whole job: needs sensors, noise and responses.</summary>
    Assess,

    /// <summary>Leadfields alone: needs no responses, noise, target or protocol.</summary>
    Leadfield,
}

/// <summary>Place in a file.</summary>
/// <param name="Line">Line, from 1.</param>
/// <param name="Column">Column, from 1.</param>
public readonly record struct TextPlace(int Line, int Column);

/// <summary>A study as read, with everything that is said about its reading.</summary>
/// <param name="Study">The study in SI units.</param>
/// <param name="Assumptions">Every value that enters the answer, stated or default, in the key's unit.</param>
/// <param name="Warnings">Warnings, `key: message`, in the order of the study's sections.</param>
/// <param name="Text">The file's text.</param>
/// <param name="Places">Place of every key that the file states, by its full key.</param>
public sealed record StudyReading(
    Study Study,
    IReadOnlyList<Assumption> Assumptions,
    IReadOnlyList<string> Warnings,
    string Text,
    IReadOnlyDictionary<string, TextPlace> Places)
{
    /// <summary>Name of the variant that this is; null for the study itself.</summary>
    public string? Variant { get; init; }

    /// <summary>The study's variants, in its order.</summary>
    public IReadOnlyList<VariantReading> Variants { get; init; } = [];

    /// <summary>A message with the variant that it is about, once.</summary>
    public string Attributed(string message) => message.StartsWith(Reading.Of(Variant, ""), StringComparison.Ordinal) ? message : Reading.Of(Variant, message);

    /// <summary>A problem with a key that shows only later, placed where the file states the key or the nearest key above it.</summary>
    public InputProblem Problem(string key, string message)
    {
        message = Attributed(message);
        for (string at = key; ;)
        {
            if (Places.TryGetValue(at, out TextPlace place))
            {
                return new(Study.File, place.Line, place.Column, key, message);
            }

            int cut = at.LastIndexOfAny(['.', '[']);
            if (cut <= 0)
            {
                return new(Study.File, 0, 0, key, message);
            }

            at = at[..cut];
        }
    }
}

/// <summary>What gathers while a study is read.</summary>
internal sealed class Reading(string file, string folder, Purpose purpose, IReadOnlyCollection<string> libraryRegions)
{
    private const int MostKept = 2000;
    private const int MostPrinted = 20;
    private const int MostSuggestions = 100;

    private int _dropped;

    /// <summary>False beyond 100 problems: a list of thousands of wrong names needs no thousands of nearest names.</summary>
    public bool Suggests => Problems.Count < MostSuggestions;

    /// <summary>Name of the variant that is read; null for the study itself.</summary>
    public string? Variant { get; init; }

    public string File { get; } = file;

    public string Folder { get; } = folder;

    public Purpose Purpose { get; } = purpose;

    public IReadOnlyCollection<string> LibraryRegions { get; } = libraryRegions;

    public List<InputProblem> Problems { get; } = [];

    public List<string> Warnings { get; } = [];

    public List<Assumption> Assumptions { get; } = [];

    public Dictionary<string, TextPlace> Places { get; } = new(StringComparer.Ordinal);

    /// <summary>Keys whose implausible values the study accepts.</summary>
    public IReadOnlyList<string> Accepted { get; set; } = [];

    public void Problem(int line, int column, string key, string message)
    {
        if (Problems.Count < MostKept)
        {
            Problems.Add(new(File, line, column, key.Length > 0 ? Shown.Text(key, 120) : null, Of(Variant, message)));
        }
        else
        {
            _dropped++;
        }
    }

    /// <summary>A message with the variant that it is about.</summary>
    public static string Of(string? variant, string message) => variant is null ? message : $"variant {Shown.Quoted(variant)}: {message}";

    public void Warn(string key, string message) => Warnings.Add($"{key}: {message}");

    /// <summary>Judges a value against its usual range.</summary>
    public void Judge(Placed at, double value, TypicalRange usual, string unit, string what = "")
    {
        PlausibilityJudgement judgement = Plausibility.Judge(at.Key, value, usual.Low, usual.High, unit, Accepted, what);
        if (judgement.Is == Plausible.Problem)
        {
            Problem(at.Line, at.Column, at.Key, judgement.Text);
        }
        else if (judgement.Is == Plausible.Warning)
        {
            Warn(at.Key, judgement.Text);
        }
    }

    /// <summary>Throws when there are problems: in the order of the file, at most 20 and the number of the others.</summary>
    public void ThrowIfAny()
    {
        if (Problems.Count == 0)
        {
            return;
        }

        List<InputProblem> ordered = [.. Problems.OrderBy(p => p.Line).ThenBy(p => p.Column)];
        int more = ordered.Count - MostPrinted + _dropped;
        if (more > 0)
        {
            ordered.RemoveRange(MostPrinted, ordered.Count - MostPrinted);
            ordered.Add(new(File, 0, 0, null, $"and {more} more"));
        }

        throw new InputException(ordered);
    }
}
