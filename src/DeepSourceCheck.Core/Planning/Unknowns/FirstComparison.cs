using System.Globalization;

using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Planning.Unknowns;

// FirstComparison.cs - which modality needs fewer trials, and what would turn that round.
//   q = N(other) / N(first). Under every rule trials go with the inverse power, so the other's noise amplitude must fall by sqrt(q), or the first's rise by it. A moment and a noise factor
//   that both share move both alike and turn nothing round. Skull (it moves EEG alone) and, where MEG noise is the sensors' own, gap (it moves MEG alone) are searched by bisection of ln(N_EEG / N_MEG), which is monotone in both.

/// <summary>The modality that comes first under one rule.</summary>
internal sealed class FirstComparison(StudySetup setup, EvaluationPlan plan, UnknownsRun run, int rule)
{
    private const double LeastSkull = 5, MostSkull = 120, LeastGap = 0.001, MostGap = 0.1;

    private const int Halvings = 30;

    /// <summary>Compares.</summary>
    /// <param name="all">[draw][verdict] effective powers.</param>
    public FirstModality Of(double[][] all)
    {
        string name = Names.Of(plan.Targets[rule]);
        int eeg = Verdict(Modality.Eeg), meg = Verdict(Modality.Meg);
        if (eeg < 0 || meg < 0)
        {
            return new FirstModality(name, null, 1, "");
        }

        double[] nominal = run.Effective(new Draw(1, 1, null));
        double balance = Balance(nominal, eeg, meg);
        if (double.IsNaN(balance))
        {
            return new FirstModality(name, null, 1, "neither EEG nor MEG reaches the target");
        }

        Modality first = balance <= 0 ? Modality.Eeg : Modality.Meg;
        double share = all.Average(e => Balance(e, eeg, meg) is var b && (first == Modality.Eeg ? b <= 0 : b >= 0) ? 1.0 : 0.0);
        return new FirstModality(name, first, share, Flip(first, balance, eeg, meg));
    }

    // Brain and room reach a nearer array with more noise, too: the gap is searched only where the sensors' own noise is all there is.
    private bool NoiseStaysWithTheSensors =>
        setup.Noise!.Terms.All(t => t.Meg?.Factor is null) && setup.Study.Noise?.MegCovariance is null;

    private int Verdict(Modality modality) => run.Verdicts.ToList().FindIndex(v => v.Measure.Modality == modality && v.Rule == rule);

    // ln(N_EEG / N_MEG): below 0 EEG comes first; NaN where neither is reached.
    private double Balance(double[] effective, int eeg, int meg) => Math.Log(run.Trials(eeg, effective[eeg])) - Math.Log(run.Trials(meg, effective[meg]));

    private string Flip(Modality first, double balance, int eeg, int meg)
    {
        Modality other = first == Modality.Eeg ? Modality.Meg : Modality.Eeg;
        if (double.IsInfinity(balance))
        {
            return $"{Names.Of(first)} stays first: {Names.Of(other)} does not reach the target by averaging";
        }

        var ways = new List<string>
        {
            string.Create(CultureInfo.InvariantCulture,
                $"the noise of {Names.Of(other)} is {Rounded.Two(Math.Exp(Math.Abs(balance) / 2))} times lower, or that of {Names.Of(first)} as much higher"),
        };
        var never = new List<string>();
        if (setup.Perturbable is { SkullRatio: { } ratio })
        {
            double? at = Crossing(Math.Log(ratio), Math.Log(first == Modality.Eeg ? MostSkull : LeastSkull), x => new HeadPerturbation { SkullRatio = Math.Exp(x) }, balance, eeg, meg);
            Say(at is { } x ? string.Create(CultureInfo.InvariantCulture, $"brain conducts more than {Rounded.Two(Math.Exp(x))} times as well as skull") : null,
                string.Create(CultureInfo.InvariantCulture, $"no ratio of brain to skull conductivity {(first == Modality.Eeg ? $"up to {MostSkull}" : $"down to {LeastSkull}")}"), first == Modality.Meg, "less than");
        }

        if (setup.Perturbable is { Gap: { } gap } && NoiseStaysWithTheSensors)
        {
            double? at = Crossing(Math.Log(gap), Math.Log(first == Modality.Eeg ? LeastGap : MostGap), x => new HeadPerturbation { Gap = Math.Exp(x) }, balance, eeg, meg);
            Say(at is { } x ? string.Create(CultureInfo.InvariantCulture, $"the coils lie {(first == Modality.Eeg ? "nearer" : "farther")} than {Rounded.Two(Si.ToMm(Math.Exp(x)))} mm from the scalp") : null,
                string.Create(CultureInfo.InvariantCulture, $"no gap {(first == Modality.Eeg ? $"down to {Si.ToMm(LeastGap):0}" : $"up to {Si.ToMm(MostGap):0}")} mm"), false, "");
        }

        string turns = $"{Names.Of(first)} stays first unless {string.Join(", or ", ways)}";
        string cannot = never.Count > 0 ? $"; {string.Join(" and ", never)} does that" : "";
        return $"{turns}{cannot}; a stronger source or a common noise factor moves both alike";

        void Say(string? way, string none, bool less, string word)
        {
            if (way is null)
            {
                never.Add(none);
            }
            else
            {
                ways.Add(less ? way.Replace("more than", word, StringComparison.Ordinal) : way);
            }
        }
    }

    // Where the balance changes sign between a nominal value and a far one, or null.
    private double? Crossing(double from, double to, Func<double, HeadPerturbation> head, double balance, int eeg, int meg)
    {
        double At(double x) => Balance(run.Effective(new Draw(1, 1, head(x))), eeg, meg);
        if (Math.Sign(At(to)) is var end && (end == Math.Sign(balance) || end == 0))
        {
            return null;
        }

        for (int k = 0; k < Halvings && Math.Abs(to - from) > 1e-3; k++)
        {
            double middle = 0.5 * (from + to);
            if (Math.Sign(At(middle)) == Math.Sign(balance))
            {
                from = middle;
            }
            else
            {
                to = middle;
            }
        }

        return to;
    }
}
