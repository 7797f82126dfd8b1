using System.Text;

using DeepSourceCheck.Cli;

AppDomain.CurrentDomain.UnhandledException += (_, e) =>
{
    // An exception on a thread of nobody's: still one line and the status of a failure.
    Console.Error.WriteLine("error: the computation failed: " + Failure.OneLine((e.ExceptionObject as Exception)?.Message ?? ""));
    Environment.Exit(ExitStatus.Failed);
};
using var interruption = Interruption.OfProcess();
Warmup.Begin(args.Length > 0 ? args[0] : null);
using var standardOutput = new StreamWriter(Console.OpenStandardOutput(), new UTF8Encoding(false), 1 << 14) { NewLine = "\n" };
using var standardError = new StreamWriter(Console.OpenStandardError(), new UTF8Encoding(false), 1 << 10) { NewLine = "\n", AutoFlush = true };
return CommandLine.Run(args, Terminal.Surroundings(standardOutput, standardError, interruption));
