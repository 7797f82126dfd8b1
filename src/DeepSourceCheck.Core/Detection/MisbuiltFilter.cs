using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Detection;

// MisbuiltFilter.cs - a filter w = C'^-1 b' that meets the field b in noise C: power (w'b)^2/(w' C w).
//   In coordinates that whiten C: x = X u the field, x' = X' u what the filter was built for, S the estimated covariance. y = S^-1 x', power (y'x)^2/(y'y).
//   With the 3 x 3 matrices A = (S^-1 X')' X and B = (S^-1 X')' (S^-1 X') it is (u'Au)^2/(u'Bu) in any direction u.
//   The largest over directions has no closed form: the best of the isotropic set, then a pattern search on the sphere.

/// <summary>What filters give that were built for the wrong place, head and covariance, of one block of dipoles and one draw. One a thread.</summary>
internal sealed class MisbuiltFilter
{
    private const int Refinements = 14;
    private const double FirstStep = 0.08;

    private readonly FilterErrors _errors;
    private readonly IHead _head;
    private readonly Modality[] _modalities;
    private readonly SignalSpace _space;
    private readonly BlockSignals _true, _wrong;
    private readonly LeadfieldBlock _block;
    private readonly Vector512<double>[][] _a = [new Vector512<double>[9], new Vector512<double>[9], new Vector512<double>[9]];
    private readonly Vector512<double>[][] _b = [new Vector512<double>[6], new Vector512<double>[6], new Vector512<double>[6]];
    private Vector512<double>[] _filter = [], _built = [], _field = [];

    /// <param name="errors">What is wrong.</param>
    /// <param name="space">Channels.</param>
    /// <param name="head">Head.</param>
    /// <param name="megReported">Whether MEG is read.</param>
    /// <param name="field">The true fields, loaded before this.</param>
    public MisbuiltFilter(FilterErrors errors, SignalSpace space, IHead head, bool megReported, BlockSignals field)
    {
        (_errors, _space, _head, _true) = (errors, space, head, field);
        bool eeg = space.Rank(Modality.Eeg) > 0;
        _modalities = [.. eeg ? new[] { Modality.Eeg } : [], .. megReported ? new[] { Modality.Meg } : [], .. eeg && megReported ? new[] { Modality.Both } : []];
        _wrong = new BlockSignals(space, head, megReported);
        _block = new LeadfieldBlock(errors.Sources[0].EegRows, errors.Sources[0].MegRows);
    }

    /// <summary>Builds the filters of a block.</summary>
    /// <param name="block">The dipoles, whose fields <see cref="BlockSignals"/> holds.</param>
    /// <param name="draw">Index of the draw.</param>
    public void Load(LeadfieldBlock block, int draw)
    {
        Span<Vec3> places = stackalloc Vec3[LeadfieldBlock.Lanes];
        Span<int> indices = stackalloc int[LeadfieldBlock.Lanes];
        for (int lane = 0; lane < places.Length; lane++)
        {
            places[lane] = _errors.Place(block.Positions[lane], draw, _head);
            indices[lane] = _errors.Nearest?.Invoke(places[lane]) ?? -1;
        }

        _block.Load(places, _errors.Nearest is null ? default : indices);
        _errors.SourceOf(draw).Fill(_block);
        _wrong.Load(_block);
        foreach (Modality modality in _modalities)
        {
            Build(modality, _errors.InverseOf(modality, draw));
        }
    }

    /// <summary>Power per squared moment [1/(A m)^2] in a direction; 0 where the filter is.</summary>
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    public Vector512<double> Power(Modality modality, in LaneDirection u)
    {
        Vector512<double>[] a = _a[(int)modality], b = _b[(int)modality];
        Vector512<double> signal = u.X * (a[0] * u.X + a[1] * u.Y + a[2] * u.Z) + u.Y * (a[3] * u.X + a[4] * u.Y + a[5] * u.Z) + u.Z * (a[6] * u.X + a[7] * u.Y + a[8] * u.Z);
        Vector512<double> two = Vector512.Create(2.0);
        Vector512<double> noise = b[0] * u.X * u.X + b[1] * u.Y * u.Y + b[2] * u.Z * u.Z + two * (b[3] * u.X * u.Y + b[4] * u.X * u.Z + b[5] * u.Y * u.Z);
        return Vector512.ConditionalSelect(Vector512.GreaterThan(noise, default), signal * signal / noise, default);
    }

    /// <summary>The largest over directions.</summary>
    public Vector512<double> Largest(Modality modality)
    {
        Vector512<double> best = default, bx = default, by = default, bz = default;
        void Try(in LaneDirection u)
        {
            Vector512<double> power = Power(modality, u), better = Vector512.GreaterThan(power, best);
            best = Vector512.Max(best, power);
            bx = Vector512.ConditionalSelect(better, u.X, bx);
            by = Vector512.ConditionalSelect(better, u.Y, by);
            bz = Vector512.ConditionalSelect(better, u.Z, bz);
        }

        foreach (Vec3 u in DirectionSets.Isotropic)
        {
            Try(LaneDirection.Same(u));
        }

        double step = FirstStep;
        for (int k = 0; k < Refinements; k++, step /= 2)
        {
            for (int axis = 0; axis < 6; axis++)
            {
                Vec3 d = (axis % 2 == 0 ? step : -step) * new Vec3(axis / 2 == 0 ? 1 : 0, axis / 2 == 1 ? 1 : 0, axis / 2 == 2 ? 1 : 0);
                Vector512<double> x = bx + Vector512.Create(d.X), y = by + Vector512.Create(d.Y), z = bz + Vector512.Create(d.Z);
                Vector512<double> length = Vector512.Sqrt(x * x + y * y + z * z);
                Try(new LaneDirection(x / length, y / length, z / length));
            }
        }

        return best;
    }

    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    private void Build(Modality modality, double[] inverse)
    {
        int rows = _space.Rank(modality);
        _true.Whitened(modality, ref _field);
        _wrong.Whitened(modality, ref _built);
        Vector512<double>[] x = _field, y = _built;
        if (inverse.Length > 0)
        {
            Array.Resize(ref _filter, Math.Max(_filter.Length, 3 * rows));
            y = _filter;
            for (int i = 0; i < rows; i++)
            {
                Vector512<double> s0 = default, s1 = default, s2 = default;
                for (int j = 0; j < rows; j++)
                {
                    Vector512<double> w = Vector512.Create(inverse[i * rows + j]);
                    s0 += w * _built[3 * j];
                    s1 += w * _built[3 * j + 1];
                    s2 += w * _built[3 * j + 2];
                }

                (y[3 * i], y[3 * i + 1], y[3 * i + 2]) = (s0, s1, s2);
            }
        }

        Vector512<double>[] a = _a[(int)modality], b = _b[(int)modality];
        Array.Clear(a);
        Array.Clear(b);
        for (int i = 0; i < rows; i++)
        {
            Vector512<double> y0 = y[3 * i], y1 = y[3 * i + 1], y2 = y[3 * i + 2], x0 = x[3 * i], x1 = x[3 * i + 1], x2 = x[3 * i + 2];
            a[0] += y0 * x0;
            a[1] += y0 * x1;
            a[2] += y0 * x2;
            a[3] += y1 * x0;
            a[4] += y1 * x1;
            a[5] += y1 * x2;
            a[6] += y2 * x0;
            a[7] += y2 * x1;
            a[8] += y2 * x2;
            b[0] += y0 * y0;
            b[1] += y1 * y1;
            b[2] += y2 * y2;
            b[3] += y0 * y1;
            b[4] += y0 * y2;
            b[5] += y1 * y2;
        }
    }
}
