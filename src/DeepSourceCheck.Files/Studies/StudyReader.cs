using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Studies;

/// <summary>Reads a study file: text, tree, walk along the registry of keys, then one binder a section into the typed study in SI units.</summary>
public static class StudyReader
{
    /// <summary>Reads a file.</summary>
    /// <param name="path">Path of the study file.</param>
    /// <param name="purpose">What the study is read for.</param>
    /// <param name="libraryRegions">Names of the library's regions.</param>
    /// <exception cref="InputException">The file is missing or wrong: every problem at once, in the order of the file.</exception>
    public static StudyReading Read(string path, Purpose purpose, IReadOnlyCollection<string> libraryRegions) =>
        ReadText(StudyFile.Read(path), path, Path.GetDirectoryName(Path.GetFullPath(path)) ?? ".", purpose, libraryRegions);

    /// <summary>Reads a text.</summary>
    /// <param name="text">The study.</param>
    /// <param name="fileName">Its name in messages.</param>
    /// <param name="folder">Folder against which relative paths are taken.</param>
    /// <param name="purpose">What the study is read for.</param>
    /// <param name="libraryRegions">Names of the library's regions.</param>
    /// <exception cref="InputException">The text is wrong: every problem at once, in the order of the file.</exception>
    public static StudyReading ReadText(string text, string fileName, string folder, Purpose purpose, IReadOnlyCollection<string> libraryRegions)
    {
        StudyFile.CheckCharacters(text, fileName);
        var reading = new Reading(fileName, folder, purpose, libraryRegions.ToHashSet(StringComparer.Ordinal));
        if (YamlTree.Parse(text, fileName, reading.Problems) is not { } tree || tree is YamlScalar { IsNull: true })
        {
            throw new InputException([new(fileName, 1, 1, null, "the file is empty; make an example with `deepsourcecheck new FOLDER`")]);
        }

        if (tree is not YamlMap top)
        {
            reading.Problem(tree.Line, tree.Column, "", $"a study holds keys with values (head:, sensors:, ...), here it is {tree.What}");
            reading.ThrowIfAny();
            throw new InvalidOperationException("A study without a top level was not refused.");
        }

        (YamlMap own, IReadOnlyList<(string Name, YamlMap Merged)> variants) = VariantReader.Split(top, reading);
        StudyReading study = ReadTree(own, reading, text);
        var problems = new List<InputProblem>();
        var read = new List<VariantReading>();
        foreach ((string name, YamlMap merged) in variants)
        {
            var other = new Reading(fileName, folder, purpose, reading.LibraryRegions) { Variant = name };
            try
            {
                read.Add(new(name, ReadTree(merged, other, text)));
            }
            catch (InputException error)
            {
                problems.AddRange(error.Problems);
            }
        }

        return problems.Count == 0 ? study with { Variants = read } : throw new InputException(problems);
    }

    private static StudyReading ReadTree(YamlMap top, Reading reading, string text)
    {
        PlacedMap placed = new StudyWalk(reading).Root(top);
        Study? study = Bind(new Section(reading, placed, ""), placed, reading);
        reading.ThrowIfAny();
        ReportUnused(placed, reading);
        reading.ThrowIfAny();
        return study is null
            ? throw new InvalidOperationException("A study that could not be bound was not refused.")
            : new(study, reading.Assumptions, reading.Warnings, text, reading.Places) { Variant = reading.Variant };
    }

    private static Study? Bind(Section root, PlacedMap placed, Reading reading)
    {
        reading.Accepted = AcceptBinder.Bind(root, reading);
        string? title = root.Text("title");
        HeadChoice? head = HeadBinder.Bind(root, reading);
        BoundSensors sensors = SensorBinder.Bind(root);
        NoiseChoice? noise = NoiseBinder.Bind(root, sensors, reading);
        IReadOnlyList<RegionChoice> regions = RegionBinder.Bind(root, sensors, reading);
        IReadOnlyList<Response> responses = ResponseBinder.Bind(root, sensors, reading);
        IReadOnlyList<TargetChoice> targets = PlanBinder.Targets(root, sensors.HasEeg || !sensors.HasMeg, responses);
        Protocol? protocol = PlanBinder.Protocol(root, responses);
        (UnknownsChoice? unknowns, head) = UnknownsBinder.Bind(root, head, responses, sensors, protocol, reading);
        PlanBinder.CheckWindows(responses, targets, protocol, reading);
        PlanBinder.CheckRate(responses, protocol, reading);
        RateCurveBinder.Check(responses, root, protocol, reading);
        PlanBinder.CheckFrequencies(responses, reading);
        EffectCheck.Warn(root, responses, targets, noise, reading);
        JudgeNumbers(placed, reading);
        return head is null ? null : new()
        {
            File = reading.File,
            Folder = reading.Folder,
            Title = title ?? "Untitled study",
            Head = head,
            Eeg = sensors.Eeg,
            Derivations = sensors.Derivations,
            Meg = sensors.Meg,
            EegBandwidth = sensors.EegBandwidth,
            MegBandwidth = sensors.MegBandwidth,
            SamplingRate = sensors.Sampling,
            Noise = noise,
            Regions = regions,
            TriggerSynchronised = !sensors.FreeTrigger,
            Responses = responses,
            Targets = targets,
            Protocol = protocol,
            Unknowns = unknowns,
            AcceptImplausible = reading.Accepted,
        };
    }

    /// <summary>Judges every number that has a usual range; the head's are judged by its binder, which knows the outermost layer.</summary>
    private static void JudgeNumbers(PlacedMap map, Reading reading)
    {
        foreach (Placed value in Below(map))
        {
            if (value is PlacedNumber { Spec.Typical: { } usual } number && !number.Spec.Path.StartsWith("head.", StringComparison.Ordinal))
            {
                reading.Judge(number, number.Value, usual, number.Spec.Unit);
            }
        }
    }

    /// <summary>A value that nothing used is reported: no key is read and ignored.</summary>
    private static void ReportUnused(PlacedMap map, Reading reading)
    {
        foreach (Placed value in Below(map).Where(v => !v.Taken))
        {
            reading.Problem(value.Line, value.Column, value.Key, "has no effect in this study; remove it");
        }
    }

    private static IEnumerable<Placed> Below(Placed value)
    {
        IEnumerable<Placed> inner = value switch
        {
            PlacedMap map => map.Order.Select(name => map.Entries[name]),
            PlacedList list => list.Items,
            _ => [],
        };
        return inner.SelectMany(v => Below(v).Prepend(v));
    }
}
