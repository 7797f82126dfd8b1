using System.Collections;
using System.Globalization;
using System.Text.Json;

using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Cli.Output;

/// <summary>How `check` shows the values that would enter an answer.</summary>
internal static class AssumptionText
{
    /// <summary>`key = value unit (source; grade)`.</summary>
    public static string Line(Assumption assumption) =>
        $"{assumption.Key} = {Value(assumption.Value)}{(assumption.Unit.Length > 0 ? " " + assumption.Unit : "")} ({assumption.Source}{(assumption.Grade is { } grade ? "; " + Names.Of(grade) : "")})";

    /// <summary>The assumption as an object of the contract's form.</summary>
    public static void Write(Utf8JsonWriter json, Assumption assumption)
    {
        json.WriteStartObject();
        json.WriteString("key", assumption.Key);
        json.WritePropertyName("value");
        WriteValue(json, assumption.Value);
        json.WriteString("unit", assumption.Unit);
        json.WriteString("origin", assumption.FromStudy ? "study" : "default");
        json.WriteString("source", assumption.Source);
        json.WriteString("grade", assumption.Grade is { } grade ? Names.Of(grade) : null);
        json.WriteEndObject();
    }

    private static string Value(object value) => value switch
    {
        string text => text,
        IEnumerable list => "[" + string.Join(", ", list.Cast<object>().Select(Value)) + "]",
        IFormattable number => number.ToString(null, CultureInfo.InvariantCulture),
        _ => value.ToString() ?? "",
    };

    private static void WriteValue(Utf8JsonWriter json, object value)
    {
        switch (value)
        {
            case double number when double.IsFinite(number):
                json.WriteNumberValue(number);
                break;
            case int number:
                json.WriteNumberValue(number);
                break;
            case long number:
                json.WriteNumberValue(number);
                break;
            case bool flag:
                json.WriteBooleanValue(flag);
                break;
            case string text:
                json.WriteStringValue(text);
                break;
            case IEnumerable list:
                json.WriteStartArray();
                foreach (object item in list)
                {
                    WriteValue(json, item);
                }

                json.WriteEndArray();
                break;
            default:
                json.WriteStringValue(Value(value));
                break;
        }
    }
}
