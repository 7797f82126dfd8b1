using System.Globalization;

using DeepSourceCheck.Core.Results;

using MathNet.Numerics.Distributions;

namespace DeepSourceCheck.Tests.Support;

/// <summary>
/// Recomputes a chain from its own formulas with a small parser of ordinary arithmetic: what a reviewer with a pocket calculator does. Inputs are the lines without formula.
/// </summary>
internal static class ChainArithmetic
{
    /// <summary>Every symbol's recomputed value; lines with a formula are checked against their printed value to 1e-12.</summary>
    public static Dictionary<string, double> Recompute(IEnumerable<DerivedNumber> lines)
    {
        var values = new Dictionary<string, double>();
        foreach (DerivedNumber line in lines)
        {
            double value = line.Formula.Length == 0 ? line.Value : new Parser(line.Formula, values).Value();
            if (ChainDistributions.Holds(line, value))
            {
                value = line.Value;                             // checked there; later lines stand on the printed digits
            }

            Assert.True(Math.Abs(value - line.Value) <= 1e-12 * Math.Abs(line.Value), $"{line.Symbol} = {line.Formula}: printed {line.Value:R}, recomputed {value:R}");
            values[line.Symbol] = value;
        }

        return values;
    }

    private sealed class Parser(string text, Dictionary<string, double> values)
    {
        private int _at;

        public double Value()
        {
            double value = Sum();
            Assert.True(_at == text.Length, $"'{text}' is no formula beyond position {_at}");
            return value;
        }

        private void Space()
        {
            while (_at < text.Length && text[_at] == ' ')
            {
                _at++;
            }
        }

        private bool Take(char c)
        {
            Space();
            bool there = _at < text.Length && text[_at] == c;
            _at += there ? 1 : 0;
            return there;
        }

        private double Sum()
        {
            double value = Product();
            while (true)
            {
                if (Take('+'))
                {
                    value += Product();
                }
                else if (Take('-'))
                {
                    value -= Product();
                }
                else
                {
                    return value;
                }
            }
        }

        private double Product()
        {
            double value = Power();
            while (true)
            {
                Space();
                if (Take('/'))
                {
                    value /= Power();
                }
                else if (_at < text.Length && (char.IsLetterOrDigit(text[_at]) || text[_at] == '('))
                {
                    value *= Power();                           // a space is a product, as in print
                }
                else
                {
                    return value;
                }
            }
        }

        private double Power()
        {
            double value = Atom();
            return Take('^') ? Math.Pow(value, Atom()) : value;
        }

        private double[] Arguments()
        {
            var arguments = new List<double>();
            Assert.True(Take('('));
            do
            {
                arguments.Add(Sum());
            }
            while (Take(','));
            Assert.True(Take(')'), $"'{text}' lacks a closing bracket");
            return [.. arguments];
        }

        private double Atom()
        {
            if (Take('('))
            {
                double inner = Sum();
                Assert.True(Take(')'), $"'{text}' lacks a closing bracket");
                return inner;
            }

            Space();
            int from = _at;
            while (_at < text.Length && (char.IsLetterOrDigit(text[_at]) || text[_at] is '_' or '.'))
            {
                _at++;
            }

            string word = text[from.._at];
            if (double.TryParse(word, NumberStyles.Float, CultureInfo.InvariantCulture, out double number))
            {
                return number;
            }

            if (_at < text.Length && text[_at] == '(' && !values.ContainsKey(word))
            {
                if (ChainDistributions.Knows(word))
                {
                    return ChainDistributions.Call(word, Arguments());
                }

                double x = Atom();
                return word switch
                {
                    "sqrt" => Math.Sqrt(x),
                    "log10" => Math.Log10(x),
                    "exp" => Math.Exp(x),
                    "ceil" => DeepSourceCheck.Core.Detection.TrialCount.Ceiling(x)!.Value,
                    "quantile" => Normal.InvCDF(0, 1, x),
                    _ => throw new FormatException($"{word} is no function of '{text}'"),
                };
            }

            return values.TryGetValue(word, out double known) ? known : throw new FormatException($"'{text}' uses {word}, which no earlier line gives");
        }
    }
}
