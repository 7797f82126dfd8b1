using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Report.Answers;

namespace DeepSourceCheck.Cli.Output;

/// <summary>How `check` shows the values that would enter an answer.</summary>
internal static class AssumptionText
{
    /// <summary>`key = value unit (source; grade)`.</summary>
    public static string Line(Assumption assumption) =>
        $"{assumption.Key} = {StudyValue.Text(assumption.Value)}{(assumption.Unit.Length > 0 ? " " + assumption.Unit : "")} ({assumption.Source}{(assumption.Grade is { } grade ? "; " + Names.Of(grade) : "")})";
}
