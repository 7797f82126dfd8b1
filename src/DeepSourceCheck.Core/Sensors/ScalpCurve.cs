using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;

namespace DeepSourceCheck.Core.Sensors;

// The plane through the three points cuts an outline from the scalp. It is followed by angle about a point inside (on a sphere: the circle's centre), and
// measured as a tape is laid: hollows are bridged, so that an ear or an eye adds nothing. A share of the tape's length is carried back to the scalp along the ray from
// that inner point. Steps of half a degree: chords fall short of the arc by 3e-6 of it.

/// <summary>A curve over a real scalp through three points of it.</summary>
internal sealed class ScalpCurve : ISiteCurve
{
    private const double Step = Math.PI / 360;

    private readonly ScalpSection _section;
    private readonly Vec3 _start, _through, _end;
    private readonly Tape _before, _after;

    private ScalpCurve(ScalpSection section, Vec3 start, Vec3 through, Vec3 end)
    {
        (_section, _start, _through, _end) = (section, start, through, end);
        double middle = Angle(through), last = Angle(end);
        _before = new(section, start, 0, through, middle);
        _after = new(section, through, middle, end, last);
    }

    /// <summary>Length of the curve as a tape measures it [m].</summary>
    public double Length => _before.Length + _after.Length;

    /// <summary>Share of the length at the middle point.</summary>
    public double MiddleShare => _before.Length / Length;

    /// <summary>The curve through three points of a scalp.</summary>
    /// <param name="scalp">Scalp.</param>
    /// <param name="inside">Point inside the head [m] about which outlines are followed: its projection onto the plane.</param>
    /// <param name="start">First point, on the scalp [m].</param>
    /// <param name="through">Second point [m].</param>
    /// <param name="end">Third point [m].</param>
    /// <returns>The curve; null where the three lie on a line or their plane does not cut the head around an inner point.</returns>
    public static ScalpCurve? Through(ScalpSurface scalp, Vec3 inside, Vec3 start, Vec3 through, Vec3 end)
    {
        Vec3 normal = Vec3.Cross(through - start, end - start).Unit();
        if (!normal.IsFinite)
        {
            return null;
        }

        // Where the projection falls outside the head (a plane that shaves it), a point between the three does.
        Vec3 centre = inside - Vec3.Dot(inside - start, normal) * normal;
        if (!scalp.Contains(centre))
        {
            centre = (start + 2 * through + end) / 4;
            if (!scalp.Contains(centre))
            {
                return null;
            }
        }

        Vec3 e1 = (start - centre).Unit();
        ScalpCurve curve = new(new(scalp, centre, e1, Vec3.Cross(normal, e1)), start, through, end);
        double middle = curve.Angle(through);
        return middle > 0 && middle < curve.Angle(end) ? curve : null;
    }

    /// <inheritdoc/>
    public Vec3 At(double share)
    {
        double at = share * Length;
        return at <= _before.Length ? Point(_before, at) : Point(_after, at - _before.Length);
    }

    /// <inheritdoc/>
    public Vec3 Before(double share) => Point(_before, share * _before.Length);

    /// <inheritdoc/>
    public Vec3 After(double share) => Point(_after, share * _after.Length);

    // The ends are points of their own: they may lie in a hollow that the outermost scalp passes over.
    private Vec3 Point(Tape tape, double length)
    {
        double total = tape.Length, nothing = 1e-12 * Length;
        return length <= nothing ? (tape == _before ? _start : _through)
            : length >= total - nothing ? (tape == _before ? _through : _end)
            : _section.At(tape.AngleAt(length)) ?? _section.Centre;
    }

    private double Angle(Vec3 p)
    {
        (double u, double v) = _section.InPlane(p);
        double angle = Math.Atan2(v, u);
        return angle < -1e-12 ? angle + 2 * Math.PI : Math.Max(0, angle);
    }

    /// <summary>The stretched tape between two points of the outline.</summary>
    private sealed class Tape
    {
        private readonly List<(double U, double V)> _corners = [];
        private readonly List<double> _lengths = [0];

        public Tape(ScalpSection section, Vec3 first, double from, Vec3 last, double to)
        {
            int steps = Math.Max(1, (int)Math.Ceiling((to - from) / Step));
            List<(double U, double V)> outline = [section.InPlane(first)];
            for (int n = 1; n < steps; n++)
            {
                if (section.At(from + (to - from) * n / steps) is { } point)
                {
                    outline.Add(section.InPlane(point));
                }
            }

            outline.Add(section.InPlane(last));
            foreach (int held in TautString.Over(outline))
            {
                _corners.Add(outline[held]);
                if (_corners.Count > 1)
                {
                    _lengths.Add(_lengths[^1] + Distance(_corners[^2], _corners[^1]));
                }
            }
        }

        public double Length => _lengths[^1];

        /// <summary>Angle [rad] of the tape's point at a length [m] from its start.</summary>
        public double AngleAt(double length)
        {
            int n = 1;
            while (n < _lengths.Count - 1 && _lengths[n] < length)
            {
                n++;
            }

            double share = (length - _lengths[n - 1]) / (_lengths[n] - _lengths[n - 1]);
            (double u0, double v0) = _corners[n - 1];
            (double u1, double v1) = _corners[n];
            return Math.Atan2(v0 + share * (v1 - v0), u0 + share * (u1 - u0));
        }

        private static double Distance((double U, double V) a, (double U, double V) b) => Math.Sqrt((a.U - b.U) * (a.U - b.U) + (a.V - b.V) * (a.V - b.V));
    }
}
