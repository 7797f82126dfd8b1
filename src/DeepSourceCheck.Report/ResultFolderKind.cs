namespace DeepSourceCheck.Report;

/// <summary>Which command writes a result folder.</summary>
public enum ResultFolderKind
{
    /// <summary>`assess`: recognised by assessment.json that names this program.</summary>
    Assessment,

    /// <summary>`leadfield`: recognised by its tables and arrays.</summary>
    Leadfield,
}
