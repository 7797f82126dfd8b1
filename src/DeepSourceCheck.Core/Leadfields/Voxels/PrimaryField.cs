using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Leadfields.Voxels;

// PrimaryField.cs - field of the dipole's own current (law of Biot and Savart), without the currents that it drives in the head.
//   B . d = mu0/(4 pi) (Q x R) . d/|R|^3 = Q . mu0/(4 pi) R x d/|R|^3,  R = r - x_0, summed over a channel's points with their shares.

/// <summary>Primary field of eight dipoles at MEG channels [T/(A m) or T/m/(A m)].</summary>
/// <remarks>Immutable.</remarks>
internal sealed class PrimaryField
{
    private const int Lanes = LeadfieldBlock.Lanes;

    /// <summary>Doubles a point takes in the table: place, axis times share and mu0/(4 pi).</summary>
    private const int Stride = 6;

    private readonly double[] _points;
    private readonly int[] _firstPoint;

    /// <param name="channels">Channels.</param>
    public PrimaryField(IReadOnlyList<MegChannel> channels)
    {
        _firstPoint = new int[channels.Count + 1];
        for (int row = 0; row < channels.Count; row++)
        {
            _firstPoint[row + 1] = _firstPoint[row] + channels[row].Points.Count;
        }

        _points = new double[_firstPoint[^1] * Stride];
        int at = 0;
        foreach (CoilPoint point in channels.SelectMany(channel => channel.Points))
        {
            (_points[at], _points[at + 1], _points[at + 2]) = point.Position;
            (_points[at + 3], _points[at + 4], _points[at + 5]) = point.Share * Si.Mu0Over4Pi * point.Axis;
            at += Stride;
        }
    }

    /// <summary>Adds the primary field to the block's MEG values, all eight lanes.</summary>
    public void Add(LeadfieldBlock block)
    {
        Span<double> lanes = stackalloc double[3 * Lanes];
        for (int lane = 0; lane < Lanes; lane++)
        {
            (lanes[lane], lanes[Lanes + lane], lanes[2 * Lanes + lane]) = block.Positions[lane];
        }

        Vector512<double> x = Vector512.Create<double>(lanes), y = Vector512.Create<double>(lanes[Lanes..]), z = Vector512.Create<double>(lanes[(2 * Lanes)..]);
        ref double point = ref MemoryMarshal.GetArrayDataReference(_points);
        Span<Vector512<double>> rows = MemoryMarshal.Cast<double, Vector512<double>>(block.Meg.AsSpan());
        for (int row = 0; row + 1 < _firstPoint.Length; row++)
        {
            Vector512<double> gx = default, gy = default, gz = default;
            for (int k = _firstPoint[row]; k < _firstPoint[row + 1]; k++)
            {
                Vector512<double> rx = Vector512.Create(point) - x, ry = Vector512.Create(Unsafe.Add(ref point, 1)) - y, rz = Vector512.Create(Unsafe.Add(ref point, 2)) - z;
                Vector512<double> dx = Vector512.Create(Unsafe.Add(ref point, 3)), dy = Vector512.Create(Unsafe.Add(ref point, 4)), dz = Vector512.Create(Unsafe.Add(ref point, 5));
                Vector512<double> r2 = Fma(rx, rx, Fma(ry, ry, rz * rz));
                Vector512<double> inverse = Vector512<double>.One / (r2 * Vector512.Sqrt(r2));
                gx = Fma(Fma(ry, dz, -(rz * dy)), inverse, gx);
                gy = Fma(Fma(rz, dx, -(rx * dz)), inverse, gy);
                gz = Fma(Fma(rx, dy, -(ry * dx)), inverse, gz);
                point = ref Unsafe.Add(ref point, Stride);
            }

            rows[3 * row] += gx;
            rows[3 * row + 1] += gy;
            rows[3 * row + 2] += gz;
        }
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector512<double> Fma(Vector512<double> a, Vector512<double> b, Vector512<double> c) => Vector512.MultiplyAddEstimate(a, b, c);
}
