using System.CommandLine;
using System.CommandLine.Parsing;

using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Cli.Commands;

/// <summary>Arguments and options that several commands share, read and checked in one way.</summary>
internal static class SharedOptions
{
    /// <summary>STUDY, optional: the embedded default study where it is left out.</summary>
    public static Argument<string?> OptionalStudy() => new("STUDY")
    {
        Description = "The study file (YAML). Left out: the embedded default study, a click response of the brainstem.",
        Arity = ArgumentArity.ZeroOrOne,
    };

    /// <summary>`--json`.</summary>
    public static Option<bool> Json() => new("--json")
    {
        Description = "Print the machine-readable result on standard output instead of text.",
        Arity = ArgumentArity.Zero,
    };

    /// <summary>`--memory SIZE` [bytes].</summary>
    public static Option<long?> Memory() => new("--memory")
    {
        Description = "Refuse the run beforehand where it would need more memory than SIZE: 4GB, 800MB, 2GiB.",
        HelpName = "SIZE",
        CustomParser = Single<long?>("--memory", "a size such as 4GB, 800MB or 2GiB", text => MemorySize.TryParse(text, out long bytes) ? bytes : null),
    };

    /// <summary>`--cache FOLDER`.</summary>
    public static Option<string?> Cache() => new("--cache")
    {
        Description = "Folder that keeps what was solved for heads of voxels, so that the next run on the same head starts at once. Left out: deepsourcecheck in the user's cache folder.",
        HelpName = "FOLDER",
        CustomParser = Single<string?>("--cache", "the name of a folder", text => text.Trim().Length > 0 ? text : null),
    };

    /// <summary>`--out FOLDER`.</summary>
    public static Option<string> Out(string description, bool required) => new("--out")
    {
        Description = description,
        HelpName = "FOLDER",
        Required = required,
        CustomParser = Single("--out", "the name of a folder", text => text.Trim().Length > 0 ? text : null),
    };

    /// <summary>A parser that reports on its own terms what the option or argument takes.</summary>
    public static Func<ArgumentResult, T?> Single<T>(string name, string takes, Func<string, T?> read) => result =>
    {
        string text = result.Tokens.Count > 0 ? result.Tokens[0].Value : "";
        T? value = read(text);
        if (value is null)
        {
            result.AddError($"{name} takes {takes}, not '{text}'.");
        }

        return value;
    };

    /// <summary>The path of the study as given, once it is clear that a file is there.</summary>
    /// <exception cref="InputException">Nothing is there, or a folder.</exception>
    public static string? Checked(string? study)
    {
        if (study is null)
        {
            return null;
        }

        if (Directory.Exists(study))
        {
            string inside = Path.Combine(study, "study.yaml");
            throw new InputException(study, null, "this is a folder, not a study file; " + (File.Exists(inside)
                ? $"name the file: {inside}"
                : $"`{CommandLine.ProgramName} new {study}` writes an example study into it"));
        }

        return File.Exists(study)
            ? study
            : throw new InputException(study, null, $"there is no such file; `{CommandLine.ProgramName} new FOLDER` writes an example study");
    }
}
