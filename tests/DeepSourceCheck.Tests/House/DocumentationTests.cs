using System.Reflection;
using System.Runtime.CompilerServices;
using System.Text.RegularExpressions;
using System.Xml.Linq;

using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Tests.House;

/// <summary>Every public member of Core is documented; where it hands out real numbers, its text names their unit or says that there is none.</summary>
public partial class DocumentationTests
{
    private static readonly Lazy<Dictionary<string, string>> Texts = new(ReadTexts);

    [Fact]
    public void PublicTypesAndMembers_AreDocumented()
    {
        string[] missing = [.. Types().Select(Id).Concat(Types().SelectMany(Members).Where(m => m is not ConstructorInfo && !IsOperator(m) && !IsPositional(m)).Select(Id)).Where(id => TextOf(id).Length == 0)];
        Assert.True(missing.Length == 0, "without documentation:\n" + string.Join('\n', missing));
    }

    [Fact]
    public void RealNumbers_NameTheirUnit()
    {
        List<string> bare = [];
        int looked = 0;
        foreach (Type type in Types().Where(t => !t.IsEnum))
        {
            bool typeSaysAll = SaysUnitForAll().IsMatch(TextOf(Id(type)));
            foreach (MemberInfo member in Members(type).Where(m => IsReal(ValueType(m)) && !IsOperator(m)))
            {
                looked++;
                string text = TextOf(Id(member));
                text = text.Length == 0 && IsPositional(member) ? TextOf(Id(type)) : text;
                if (!typeSaysAll && !NamesUnit().IsMatch(text))
                {
                    bare.Add($"{Id(member)}: {text}");
                }
            }
        }

        Assert.True(looked > 20, $"only {looked} members with real numbers were found: the search itself is broken");
        Assert.True(bare.Count == 0, "these neither name a unit in brackets nor say that there is none:\n" + string.Join('\n', bare));
    }

    [Theory]
    [InlineData("Outer radius [m].", true)]
    [InlineData("Metres from millimetres.", true)]
    [InlineData("Share of trials that are rejected.", true)]
    [InlineData("Unit vector along the axis.", true)]
    [InlineData("The noise.", false)]
    [InlineData("How strong the source is.", false)]
    public void NamesUnit_TellsUnitsFromWords(string text, bool expected) => Assert.Equal(expected, NamesUnit().IsMatch(text));

    private static IEnumerable<Type> Types() => typeof(Vec3).Assembly.GetExportedTypes().Where(t => t.GetCustomAttribute<CompilerGeneratedAttribute>() is null);

    private static IEnumerable<MemberInfo> Members(Type type)
    {
        const BindingFlags Declared = BindingFlags.Public | BindingFlags.Instance | BindingFlags.Static | BindingFlags.DeclaredOnly;
        return type.GetMembers(Declared).Where(m => m switch
        {
            // Of records, only what the source writes: the compiler's own methods are not ours to document.
            MethodBase method when method.IsDefined(typeof(CompilerGeneratedAttribute)) || (method.IsSpecialName && !IsOperator(method)) => false,
            MethodInfo method => method.GetBaseDefinition() == method && method.Name is not ("Deconstruct" or "<Clone>$" or "ToString" or "Equals" or "GetHashCode" or "PrintMembers"),
            FieldInfo field => field.Name != "value__",
            PropertyInfo property => property.Name != "EqualityContract",
            Type or EventInfo => false,
            _ => true,
        });
    }

    private static bool IsOperator(MemberInfo member) => member is MethodInfo { IsSpecialName: true } method && method.Name.StartsWith("op_", StringComparison.Ordinal);

    /// <summary>A member that a record's header declares: where the header documents no parameter, the record's own summary speaks for them all.</summary>
    private static bool IsPositional(MemberInfo member) => member is PropertyInfo property && property.DeclaringType!.GetConstructors()
        .Any(c => c.GetParameters().Any(p => p.Name == property.Name));

    private static Type? ValueType(MemberInfo member) => member switch
    {
        PropertyInfo property => property.PropertyType,
        FieldInfo field => field.FieldType,
        MethodInfo method => method.ReturnType,
        _ => null,
    };

    /// <summary>Numbers with a possible unit: double, Vec3, and arrays, lists, spans and options of them.</summary>
    private static bool IsReal(Type? type) =>
        type is not null
        && (type == typeof(double) || type == typeof(Vec3)
            || (type.IsArray && IsReal(type.GetElementType()))
            || (type.IsGenericType && type.GetGenericTypeDefinition().Name.Split('`')[0] is "Nullable" or "IReadOnlyList" or "ReadOnlySpan" or "Span" or "ReadOnlyMemory"
                && type.GenericTypeArguments.Length == 1 && IsReal(type.GenericTypeArguments[0])));

    private static string TextOf(string id) => Texts.Value.GetValueOrDefault(id, "");

    /// <summary>Documentation by identifier; properties made of record parameters take the parameter's text.</summary>
    private static Dictionary<string, string> ReadTexts()
    {
        string file = Path.ChangeExtension(typeof(Vec3).Assembly.Location, ".xml");
        Assert.True(File.Exists(file), $"{file} is not there: Core must write its documentation file");
        Dictionary<string, string> texts = [];
        foreach (XElement member in XDocument.Load(file).Descendants("member"))
        {
            string id = member.Attribute("name")!.Value;
            bool inherited = member.Element("inheritdoc") is not null;
            string key = Simplified(id);
            string text = inherited ? "inherited: unit as in the interface [ ]" : Flat(member);
            texts[key] = texts.GetValueOrDefault(key, "") + " " + text;
            if (id.StartsWith("T:", StringComparison.Ordinal) || id.Contains("#ctor", StringComparison.Ordinal))
            {
                string type = id[2..].Split(".#ctor")[0];
                foreach (XElement parameter in member.Elements("param"))
                {
                    texts[$"P:{type}.{parameter.Attribute("name")!.Value}"] = Flat(parameter) + " ";
                }
            }
        }

        return texts.ToDictionary(t => t.Key, t => t.Value.Trim());
    }

    /// <summary>The text on one line, references by their names.</summary>
    private static string Flat(XElement element) => Regex.Replace(
        string.Concat(element.DescendantNodes().Select(node => node switch
        {
            XText text => text.Value,
            XElement { IsEmpty: true } reference => (reference.Attribute("name") ?? reference.Attribute("cref"))?.Value.Split('.')[^1] ?? "",
            _ => "",
        })), @"\s+", " ").Trim();

    // Overloads share one identifier: the text of any of them counts.
    private static string Simplified(string id) => id.Split('(')[0].Split("``")[0];

    private static string Id(MemberInfo member) => member switch
    {
        Type type => "T:" + type.FullName!.Replace('+', '.'),
        PropertyInfo p => $"P:{p.DeclaringType!.FullName!.Replace('+', '.')}.{p.Name}",
        FieldInfo f => $"F:{f.DeclaringType!.FullName!.Replace('+', '.')}.{f.Name}",
        MethodInfo m => $"M:{m.DeclaringType!.FullName!.Replace('+', '.')}.{m.Name}",
        _ => $"M:{member.DeclaringType!.FullName!.Replace('+', '.')}.#ctor",
    };

    [GeneratedRegex(@"\[[^\]]+\]|\b(metres?|millimetres?|volts?|microvolts?|nanovolts?|tesla|femtotesla|ampere|nanoampere|radians?|degrees?|millilitres?|seconds?|minutes?|hertz|decibels?|dB|per cent)\b"
        + @"|without unit|unit vectors?|in the unit of|in units of|units? by context|unit of the|in Unit\b|in voxels|relative|\b(ratio|share|fraction|factor|weights?|correlation|power SNR|probability|rate over all|number( \w+)? of|counts?|cosine|sine|index|exponent|percentile|quantile|power of detecting|times the|degree)\b",
        RegexOptions.IgnoreCase | RegexOptions.CultureInvariant)]
    private static partial Regex NamesUnit();

    [GeneratedRegex(@"units? by context|without units?\b", RegexOptions.IgnoreCase | RegexOptions.CultureInvariant)]
    private static partial Regex SaysUnitForAll();
}
