namespace DeepSourceCheck.Core.Units;

/// <summary>Conversions between the units of study files and results and the SI units used inside. One place, named by unit.</summary>
public static class Si
{
    /// <summary>mu0/(4 pi) [T m/A], the exact pre-2019 value 1e-7 (the CODATA 2018 value is 5.4e-10 larger).</summary>
    public const double Mu0Over4Pi = 1e-7;

    /// <summary>Metres from millimetres.</summary>
    public static double FromMm(double mm) => mm / 1000.0;

    /// <summary>Millimetres from metres.</summary>
    public static double ToMm(double metres) => metres * 1000.0;

    /// <summary>Ampere metres from nanoampere metres.</summary>
    public static double FromNanoAmpereMetres(double nAm) => nAm / 1e9;

    /// <summary>Nanoampere metres from ampere metres.</summary>
    public static double ToNanoAmpereMetres(double moment) => moment * 1e9;

    /// <summary>Volts from microvolts.</summary>
    public static double FromMicrovolts(double microvolts) => microvolts / 1e6;

    /// <summary>Microvolts from volts.</summary>
    public static double ToMicrovolts(double volts) => volts * 1e6;

    /// <summary>Volts from nanovolts.</summary>
    public static double FromNanovolts(double nanovolts) => nanovolts / 1e9;

    /// <summary>Tesla from femtotesla.</summary>
    public static double FromFemtotesla(double femtotesla) => femtotesla / 1e15;

    /// <summary>Femtotesla from tesla.</summary>
    public static double ToFemtotesla(double tesla) => tesla * 1e15;

    /// <summary>Tesla per metre from femtotesla per centimetre.</summary>
    public static double FromFemtoteslaPerCm(double femtoteslaPerCm) => femtoteslaPerCm / 1e13;

    /// <summary>Femtotesla per centimetre from tesla per metre.</summary>
    public static double ToFemtoteslaPerCm(double teslaPerMetre) => teslaPerMetre * 1e13;

    /// <summary>Millilitres from cubic metres.</summary>
    public static double ToMillilitres(double cubicMetres) => cubicMetres * 1e6;

    /// <summary>Radians from degrees.</summary>
    public static double FromDegrees(double degrees) => degrees * (Math.PI / 180.0);

    /// <summary>Degrees from radians.</summary>
    public static double ToDegrees(double radians) => radians * (180.0 / Math.PI);
}
