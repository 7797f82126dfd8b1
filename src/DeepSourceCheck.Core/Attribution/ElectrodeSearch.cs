namespace DeepSourceCheck.Core.Attribution;

// ElectrodeSearch.cs - which electrodes carry a response.
//   A set of electrodes is worth the mean power over fields of its matched filter, x_S' C_S^-1 x_S, taken over the differences between its electrodes: two electrodes are
//   one difference, k are k - 1. Differences know no reference, so that neither the value nor the choice depends on one.
//   The best pair comes from all pairs. Its first electrode then stands for the reference (any of the set gives the same value), and one electrode after the other joins:
//     gain of k = sum_s x_ks^2 / C_kk,   then for all others  x_l -= C_lk x_k / C_kk,   C_lm -= C_lk C_km / C_kk,
//   the step of a Cholesky factorisation whose pivot is the electrode that gains most. Greedy: no electrode leaves, so that a set may fall short of the best of its size;
//   the tests compare with exhaustive search.

/// <summary>Chooses electrodes one by one.</summary>
public sealed class ElectrodeSearch
{
    // What is left of an electrode's variance below this share is rounding: it repeats what others read.
    private const double NothingNew = 1e-10;

    private readonly double[] _covariance, _fields;
    private readonly int _electrodes, _count;

    /// <param name="covariance">C of the electrodes [V^2], any reference, row by row.</param>
    /// <param name="fields">x, [electrode][field] [V per unit moment, or V], the same reference.</param>
    /// <param name="electrodes">Number of electrodes, at least 2.</param>
    public ElectrodeSearch(double[] covariance, double[] fields, int electrodes)
    {
        if (electrodes < 2 || covariance.Length != electrodes * electrodes || fields.Length % electrodes != 0 || fields.Length == 0)
        {
            throw new ArgumentException($"{electrodes} electrodes with {covariance.Length} covariances and {fields.Length} field values: at least two electrodes, a square covariance and whole rows are needed.");
        }

        (_covariance, _fields, _electrodes, _count) = (covariance, fields, electrodes, fields.Length / electrodes);
    }

    /// <summary>Power SNR of every field in one difference of two electrodes, per the squared unit of the fields.</summary>
    public double[] Pair(int a, int b)
    {
        double variance = Variance(a, b);
        return [.. Enumerable.Range(0, _count).Select(s => variance > 0 ? Square(_fields[a * _count + s] - _fields[b * _count + s]) / variance : 0)];
    }

    /// <summary>All pairs, best first; ties keep the electrodes' order.</summary>
    public IReadOnlyList<(int A, int B, double Mean)> Pairs() =>
        [.. Enumerable.Range(0, _electrodes).SelectMany(a => Enumerable.Range(a + 1, _electrodes - a - 1).Select(b => (a, b, Pair(a, b).Average()))).OrderByDescending(p => p.Item3)];

    /// <summary>The greedy choice: electrodes in the order in which they join, and after each from the second on the power of every field.</summary>
    /// <param name="most">Largest number of electrodes.</param>
    public IReadOnlyList<ChosenElectrode> Greedy(int most)
    {
        (int first, int second, _) = Pairs()[0];
        double[] c = new double[_electrodes * _electrodes], x = new double[_fields.Length];
        for (int i = 0; i < _electrodes; i++)
        {
            for (int j = 0; j < _electrodes; j++)
            {
                c[i * _electrodes + j] = At(i, j) - At(i, first) - At(first, j) + At(first, first);
            }

            for (int s = 0; s < _count; s++)
            {
                x[i * _count + s] = _fields[i * _count + s] - _fields[first * _count + s];
            }
        }

        double[] start = [.. Enumerable.Range(0, _electrodes).Select(k => c[k * _electrodes + k])];
        var free = Enumerable.Range(0, _electrodes).Where(k => k != first).ToList();
        double[] powers = new double[_count];
        var chosen = new List<ChosenElectrode> { new(first, [.. powers]) };
        for (int next = second; chosen.Count < Math.Min(most, _electrodes); next = Best(free, c, x, start))
        {
            if (next < 0)
            {
                break;
            }

            double pivot = c[next * _electrodes + next];
            free.Remove(next);
            for (int s = 0; s < _count; s++)
            {
                powers[s] += Square(x[next * _count + s]) / pivot;
            }

            chosen.Add(new(next, [.. powers]));
            foreach (int other in free)
            {
                double share = c[other * _electrodes + next] / pivot;
                for (int s = 0; s < _count; s++)
                {
                    x[other * _count + s] -= share * x[next * _count + s];
                }
            }

            foreach (int other in free)
            {
                double share = c[other * _electrodes + next] / pivot;
                foreach (int last in free)
                {
                    c[other * _electrodes + last] -= share * c[next * _electrodes + last];
                }
            }
        }

        return chosen;
    }

    // The electrode that gains most; -1 where none reads anything new.
    private int Best(List<int> free, double[] c, double[] x, double[] start)
    {
        int best = -1;
        double most = 0;
        foreach (int k in free)
        {
            double variance = c[k * _electrodes + k], gain = 0;
            if (variance <= NothingNew * start[k])
            {
                continue;
            }

            for (int s = 0; s < _count; s++)
            {
                gain += Square(x[k * _count + s]);
            }

            if (gain / variance > most)
            {
                (best, most) = (k, gain / variance);
            }
        }

        return best;
    }

    private double Variance(int a, int b) => At(a, a) - At(a, b) - At(b, a) + At(b, b);

    private double At(int i, int j) => _covariance[i * _electrodes + j];

    private static double Square(double x) => x * x;
}

/// <summary>One step of the choice.</summary>
/// <param name="Electrode">Its index.</param>
/// <param name="Powers">Power SNR of every field with the electrodes so far; zero for the first, which reads no difference.</param>
public sealed record ChosenElectrode(int Electrode, double[] Powers);
