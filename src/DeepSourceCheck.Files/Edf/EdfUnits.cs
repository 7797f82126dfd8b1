using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Edf;

/// <summary>Physical dimensions of potentials.</summary>
internal static class EdfUnits
{
    /// <summary>Volts in one unit of a signal.</summary>
    /// <param name="signal">The signal.</param>
    /// <param name="display">File as the user named it.</param>
    /// <exception cref="InputException">The unit is none of a potential.</exception>
    public static double Volts(EdfSignal signal, string display) => signal.Unit switch
    {
        "nV" => 1e-9,
        "uV" => 1e-6,
        "mV" => 1e-3,
        "V" => 1,
        _ => throw new InputException(display, $"physical dimension of {signal.Name}",
            $"is {Shown.Quoted(signal.Unit)}; a recording of potentials has nV, uV, mV or V: correct the export, or name other channels under noise.eeg_recording.channels"),
    };
}
