namespace DeepSourceCheck.Files.Edf;

/// <summary>What the header of an EDF, EDF+ or BDF file says, checked against the size of the file. Fields that identify a person or a place are not read.</summary>
/// <remarks>Kemp et al. 1992, Electroencephalogr Clin Neurophysiol 82:391 (EDF); Kemp and Olivan 2003, Clin Neurophysiol 114:1755 (EDF+). BDF: the same with samples of 24 bits.</remarks>
public sealed record EdfHeader
{
    /// <summary>File as the user named it.</summary>
    public required string DisplayName { get; init; }

    /// <summary>Bytes of a sample: 2 in EDF, 3 in BDF.</summary>
    public required int SampleBytes { get; init; }

    /// <summary>True where data records need not follow each other without gaps (EDF+D, BDF+D): each then states its start in an annotation.</summary>
    public required bool Discontinuous { get; init; }

    /// <summary>Size of the header [bytes].</summary>
    public required int HeaderBytes { get; init; }

    /// <summary>Number of data records.</summary>
    public required long Records { get; init; }

    /// <summary>True where the header leaves the number of records open (-1) and it was counted from the size of the file.</summary>
    public required bool RecordsCounted { get; init; }

    /// <summary>Duration of a data record [s]; 0 in files of annotations alone.</summary>
    public required double RecordSeconds { get; init; }

    /// <summary>Size of a data record [bytes].</summary>
    public required int RecordBytes { get; init; }

    /// <summary>The signals in their order.</summary>
    public required IReadOnlyList<EdfSignal> Signals { get; init; }

    /// <summary>BDF or EDF, with what is known of its continuity, for messages.</summary>
    public string Kind => (SampleBytes == 3 ? "BDF" : "EDF") + (Discontinuous ? "+D" : "");
}

/// <summary>One signal of a file.</summary>
public sealed record EdfSignal
{
    /// <summary>Place among the signals, from 0.</summary>
    public required int Index { get; init; }

    /// <summary>Label, without the spaces that fill the field.</summary>
    public required string Label { get; init; }

    /// <summary>Physical dimension as written.</summary>
    public required string Unit { get; init; }

    /// <summary>Prefiltering as written (`HP:0.1Hz LP:75Hz N:50Hz`).</summary>
    public required string Prefilter { get; init; }

    /// <summary>Physical value of <see cref="DigitalMinimum"/>, in the signal's unit.</summary>
    public required double PhysicalMinimum { get; init; }

    /// <summary>Physical value of <see cref="DigitalMaximum"/>, in the signal's unit.</summary>
    public required double PhysicalMaximum { get; init; }

    /// <summary>Smallest sample.</summary>
    public required int DigitalMinimum { get; init; }

    /// <summary>Largest sample.</summary>
    public required int DigitalMaximum { get; init; }

    /// <summary>Samples in a data record.</summary>
    public required int SamplesPerRecord { get; init; }

    /// <summary>Where the signal's samples begin in a data record [bytes].</summary>
    public required int Offset { get; init; }

    /// <summary>True for a channel of annotations, whose bytes are text.</summary>
    public bool IsAnnotations => Label is "EDF Annotations" or "BDF Annotations";

    /// <summary>As messages name it.</summary>
    public string Name => $"signal {Index + 1} ({Shown.Text(Label)})";
}
