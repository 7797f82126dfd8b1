using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Edf;

/// <summary>Which signal of a file is which electrode of a study.</summary>
/// <remarks>
/// By name, capital and small letters alike. Conventions: `EEG ` before the name is the type that EDF+ asks for; what follows a dash is the reference, which must be the same
/// for all electrodes; T3, T4, T5, T6 are T7, T8, P7, P8. Nothing else is guessed: ear lobes are no mastoids.
/// </remarks>
public static class EdfChannels
{
    private const string Key = "noise.eeg_recording", ChannelsKey = Key + ".channels", ReferenceKey = Key + ".reference";

    /// <summary>Finds the signals.</summary>
    /// <param name="header">Header of the file.</param>
    /// <param name="electrodes">Names of the study's electrodes.</param>
    /// <param name="labels">Labels in the order of the electrodes without the reference; null: found by name.</param>
    /// <param name="reference">Electrode of the study against which the file was recorded and which needs no signal; null where none is stated.</param>
    /// <returns>For each electrode the place of its signal, or -1 for the reference, whose potential is 0.</returns>
    /// <exception cref="InputException">Electrodes without a signal, or with several; references that differ or contradict the study.</exception>
    public static int[] Match(EdfHeader header, IReadOnlyList<string> electrodes, IReadOnlyList<string>? labels, string? reference)
    {
        int zero = reference is null ? -1 : Find(electrodes, reference);
        if (reference is not null && zero < 0)
        {
            throw new InputException(null, ReferenceKey, $"{Shown.Quoted(reference)} is no electrode of the study ({Names(electrodes)}); leave the key out where the recording's reference is none of them");
        }

        return labels is null ? ByName(header, electrodes, zero) : Stated(header, electrodes, labels, zero);
    }

    private static int[] Stated(EdfHeader header, IReadOnlyList<string> electrodes, IReadOnlyList<string> labels, int zero)
    {
        string[] due = [.. electrodes.Where((_, k) => k != zero)];
        if (labels.Count != due.Length)
        {
            throw new InputException(null, ChannelsKey, $"names {labels.Count} labels for {due.Length} electrodes; state one for each, in this order: {Names(due)}");
        }

        var result = new int[electrodes.Count];
        int next = 0;
        for (int k = 0; k < result.Length; k++)
        {
            result[k] = k == zero ? -1 : Signal(labels[next++]);
        }

        return result.Where(s => s >= 0).Distinct().Count() == labels.Count ? result : throw new InputException(null, ChannelsKey, "names a label twice; every electrode has its own");

        int Signal(string label)
        {
            EdfSignal[] found = [.. header.Signals.Where(s => !s.IsAnnotations && s.Label.Equals(label, StringComparison.OrdinalIgnoreCase))];
            return found.Length == 1 ? found[0].Index : throw new InputException(null, ChannelsKey,
                $"{Shown.Quoted(label)} stands {(found.Length == 0 ? "nowhere" : $"{found.Length} times")} among the labels of {header.DisplayName}, which are {Labels(header)}");
        }
    }

    private static int[] ByName(EdfHeader header, IReadOnlyList<string> electrodes, int zero)
    {
        (int Index, string Label, string Name, string Against)[] signals = [.. header.Signals.Where(s => !s.IsAnnotations).Select(Parted)];
        var result = new int[electrodes.Count];
        var missing = new List<string>();
        for (int k = 0; k < result.Length; k++)
        {
            (int Index, string Label, string Name, string Against)[] found = [.. signals.Where(s => Same(s.Name, electrodes[k]))];
            if (found.Length > 1)
            {
                throw new InputException(header.DisplayName, "labels", $"{found[0].Label} and {found[1].Label} both are electrode {electrodes[k]}; name the one that is meant under {ChannelsKey}");
            }

            result[k] = found.Length == 1 && k != zero ? found[0].Index : -1;
            if (found.Length == 0 && k != zero)
            {
                missing.Add(electrodes[k]);
            }
        }

        (int Index, string Label, string Name, string Against)[] used = [.. signals.Where(s => result.Contains(s.Index))];
        if (used.FirstOrDefault(s => !s.Against.Equals(used[0].Against, StringComparison.OrdinalIgnoreCase)) is { Label: not null } other)
        {
            throw new InputException(header.DisplayName, "labels",
                $"{used[0].Label} and {other.Label} were recorded against different references; a covariance needs one: export the recording against a common reference");
        }

        // All labels end in one electrode of the study: that is the reference, whether or not the study says so.
        int named = used.Length == 0 ? -1 : Find(electrodes, used[0].Against);
        if (zero >= 0 && named >= 0 && named != zero)
        {
            throw new InputException(null, ReferenceKey, $"is {electrodes[zero]}, but the labels of {header.DisplayName} say {electrodes[named]} ({used[0].Label})");
        }

        missing.RemoveAll(name => named >= 0 && name == electrodes[named]);
        return missing.Count == 0 ? result : throw new InputException(header.DisplayName, "labels",
            $"no signal is electrode {Names(missing)}; the file's labels are {Labels(header)}: name the signals under {ChannelsKey}, the recording's own reference under {ReferenceKey}, or plan with electrodes that were recorded");
    }

    private static (int Index, string Label, string Name, string Against) Parted(EdfSignal signal)
    {
        string text = signal.Label.StartsWith("EEG ", StringComparison.OrdinalIgnoreCase) ? signal.Label[4..].Trim() : signal.Label;
        int dash = text.IndexOf('-', StringComparison.Ordinal);
        return dash > 0 ? (signal.Index, signal.Label, text[..dash].Trim(), text[(dash + 1)..].Trim()) : (signal.Index, signal.Label, text, "");
    }

    private static int Find(IReadOnlyList<string> electrodes, string name) => electrodes.ToList().FindIndex(e => Same(name, e));

    private static bool Same(string label, string electrode) =>
        label.Equals(electrode, StringComparison.OrdinalIgnoreCase) || ElectrodeLayout.PresentName(label).Equals(electrode, StringComparison.OrdinalIgnoreCase);

    private static string Labels(EdfHeader header) => Names([.. header.Signals.Where(s => !s.IsAnnotations).Select(s => Shown.Text(s.Label))]);

    private static string Names(IReadOnlyList<string> names)
    {
        const int most = 80;
        return names.Count <= most ? string.Join(", ", names) : $"{string.Join(", ", names.Take(most))} and {names.Count - most} more";
    }
}
