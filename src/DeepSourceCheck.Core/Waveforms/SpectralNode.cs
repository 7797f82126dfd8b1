namespace DeepSourceCheck.Core.Waveforms;

/// <summary>A frequency at which a waveform weighs the noise.</summary>
/// <param name="Frequency">Frequency [Hz].</param>
/// <param name="Energy">Integral of |A(f)|^2 that it stands for [s]: a sum over nodes of energy times g(f) is the integral of |A(f)|^2 g(f).</param>
public readonly record struct SpectralNode(double Frequency, double Energy);
