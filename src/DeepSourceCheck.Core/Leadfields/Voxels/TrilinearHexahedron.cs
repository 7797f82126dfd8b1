using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Leadfields.Voxels;

// TrilinearHexahedron.cs - geometry of one element.
//   psi_c(u, v, w) = (u or 1-u) (v or 1-v) (w or 1-w), each the first where bit 0, 1, 2 of c is set;  x(u, v, w) = sum psi_c x_c,  0 <= u, v, w <= 1
//   J = (x_u, x_v, x_w);  grad psi = (psi_u x_v x x_w + psi_v x_w x x_u + psi_w x_u x x_v) / det J   (x between vectors: vector product)
//   The natural coordinates of a point are found by Newton's method; of a point outside by damped Gauss-Newton steps within the unit cube.

/// <summary>Shape functions of a hexahedron with eight corners, numbered as in <see cref="HexMesh"/>. Natural coordinates run from 0 to 1, without unit.</summary>
internal static class TrilinearHexahedron
{
    /// <summary>Corners of an element.</summary>
    public const int Corners = 8;

    /// <summary>The two Gauss points of an interval from 0 to 1: exact to third degree.</summary>
    public const double GaussLow = 0.21132486540518711775, GaussHigh = 1 - GaussLow;

    /// <summary>A coordinate this far outside the unit cube still counts as inside: rounding never decides.</summary>
    private const double Rounding = 1e-9;

    private const double Converged = 1e-12;
    private const int MostSteps = 50, MostSweeps = 200, MostHalvings = 40;

    /// <summary>Numbers and places [m] of the corners of the element of voxel (i, j, k), which must not be air.</summary>
    public static void Load(HexMesh mesh, int i, int j, int k, Span<int> nodes, Span<Vec3> places)
    {
        for (int c = 0; c < Corners; c++)
        {
            int x = i + (c & 1), y = j + (c >> 1 & 1), z = k + (c >> 2);
            nodes[c] = mesh.Nodes.IndexOf(x, y, z);
            places[c] = mesh.Position(x, y, z, nodes[c]);
        }
    }

    /// <summary>Shape functions at a natural coordinate, without unit: they sum to 1.</summary>
    public static void Shape(Vec3 natural, Span<double> values)
    {
        (double u, double v, double w) = natural;
        for (int c = 0; c < Corners; c++)
        {
            values[c] = ((c & 1) == 0 ? 1 - u : u) * ((c & 2) == 0 ? 1 - v : v) * ((c & 4) == 0 ? 1 - w : w);
        }
    }

    /// <summary>The place [m] of a natural coordinate.</summary>
    public static Vec3 Place(ReadOnlySpan<Vec3> places, Vec3 natural)
    {
        Span<double> shape = stackalloc double[Corners];
        Shape(natural, shape);
        Vec3 sum = Vec3.Zero;
        for (int c = 0; c < Corners; c++)
        {
            sum += shape[c] * places[c];
        }

        return sum;
    }

    /// <summary>Gradients of the shape functions [1/m] at a natural coordinate.</summary>
    /// <returns>det J [m^3], negative in a mirrored frame.</returns>
    public static double Gradients(ReadOnlySpan<Vec3> places, Vec3 natural, Span<Vec3> gradients)
    {
        (Vec3 xu, Vec3 xv, Vec3 xw) = Jacobian(places, natural);
        Vec3 a = Vec3.Cross(xv, xw), b = Vec3.Cross(xw, xu), c = Vec3.Cross(xu, xv);
        double det = Vec3.Dot(xu, a);
        for (int corner = 0; corner < Corners; corner++)
        {
            (double du, double dv, double dw) = Slope(corner, natural);
            gradients[corner] = (du * a + dv * b + dw * c) / det;
        }

        return det;
    }

    /// <summary>The natural coordinates of the point of the element that lies nearest to a place [m]; of the place itself where it lies inside.</summary>
    /// <remarks>
    /// From outside, an element with moved corners may show several places that are nearest among their neighbours: the search then starts from the middle and from beside each corner.
    /// </remarks>
    /// <returns>The coordinates and the distance [m], 0 inside.</returns>
    public static (Vec3 Natural, double Distance) Nearest(ReadOnlySpan<Vec3> places, Vec3 point)
    {
        (Vec3 Natural, double Distance) best = NearestFrom(places, point, new(0.5, 0.5, 0.5));
        for (int corner = 0; corner < Corners && best.Distance > 0; corner++)
        {
            Vec3 start = new((corner & 1) == 0 ? 0.1 : 0.9, (corner & 2) == 0 ? 0.1 : 0.9, (corner & 4) == 0 ? 0.1 : 0.9);
            (Vec3 Natural, double Distance) other = NearestFrom(places, point, start);
            best = other.Distance < best.Distance ? other : best;
        }

        return best;
    }

    // Steps that do not come nearer are halved.
    private static (Vec3 Natural, double Distance) NearestFrom(ReadOnlySpan<Vec3> places, Vec3 point, Vec3 start)
    {
        Vec3 at = start, miss = point - Place(places, at);
        for (int step = 0; step < MostSteps; step++)
        {
            (Vec3 xu, Vec3 xv, Vec3 xw) = Jacobian(places, at);
            Vec3 a = Vec3.Cross(xv, xw);
            Vec3 full = new Vec3(Vec3.Dot(miss, a), Vec3.Dot(miss, Vec3.Cross(xw, xu)), Vec3.Dot(miss, Vec3.Cross(xu, xv))) / Vec3.Dot(xu, a);
            Vec3 move = (IsInside(at + full) ? at + full : Confined(xu, xv, xw, miss, at)) - at;
            if (move.Norm < Converged)
            {
                break;
            }

            Vec3 next = point - Place(places, at + move);
            for (int halving = 0; next.Norm > miss.Norm && halving < MostHalvings; halving++)
            {
                move = 0.5 * move;
                next = point - Place(places, at + move);
            }

            if (!(next.Norm < miss.Norm))
            {
                break;
            }

            (at, miss) = (at + move, next);
        }

        at = new(Math.Clamp(at.X, 0, 1), Math.Clamp(at.Y, 0, 1), Math.Clamp(at.Z, 0, 1));
        double distance = (point - Place(places, at)).Norm;
        return (at, distance > Rounding * (places[7] - places[0]).Norm ? distance : 0);
    }

    private static bool IsInside(Vec3 natural) =>
        natural.X is >= -Rounding and <= 1 + Rounding && natural.Y is >= -Rounding and <= 1 + Rounding && natural.Z is >= -Rounding and <= 1 + Rounding;

    // Least |miss - J d| with at + d in the unit cube: one coordinate after the other, which converges for every positive definite J'J.
    private static Vec3 Confined(Vec3 xu, Vec3 xv, Vec3 xw, Vec3 miss, Vec3 at)
    {
        double uu = Vec3.Dot(xu, xu), vv = Vec3.Dot(xv, xv), ww = Vec3.Dot(xw, xw), uv = Vec3.Dot(xu, xv), uw = Vec3.Dot(xu, xw), vw = Vec3.Dot(xv, xw);
        double bu = Vec3.Dot(xu, miss), bv = Vec3.Dot(xv, miss), bw = Vec3.Dot(xw, miss);
        double u = 0, v = 0, w = 0;
        for (int sweep = 0; sweep < MostSweeps; sweep++)
        {
            double u1 = Math.Clamp((bu - uv * v - uw * w) / uu, -at.X, 1 - at.X);
            double v1 = Math.Clamp((bv - uv * u1 - vw * w) / vv, -at.Y, 1 - at.Y);
            double w1 = Math.Clamp((bw - uw * u1 - vw * v1) / ww, -at.Z, 1 - at.Z);
            double change = Math.Abs(u1 - u) + Math.Abs(v1 - v) + Math.Abs(w1 - w);
            (u, v, w) = (u1, v1, w1);
            if (change < Converged / 10)
            {
                break;
            }
        }

        return at + new Vec3(u, v, w);
    }

    private static (Vec3 U, Vec3 V, Vec3 W) Jacobian(ReadOnlySpan<Vec3> places, Vec3 natural)
    {
        Vec3 xu = Vec3.Zero, xv = Vec3.Zero, xw = Vec3.Zero;
        for (int c = 0; c < Corners; c++)
        {
            (double du, double dv, double dw) = Slope(c, natural);
            xu += du * places[c];
            xv += dv * places[c];
            xw += dw * places[c];
        }

        return (xu, xv, xw);
    }

    // Derivatives of psi_c along u, v and w.
    private static Vec3 Slope(int c, Vec3 natural)
    {
        (double u, double v, double w) = natural;
        double pu = (c & 1) == 0 ? 1 - u : u, pv = (c & 2) == 0 ? 1 - v : v, pw = (c & 4) == 0 ? 1 - w : w;
        double su = (c & 1) == 0 ? -1 : 1, sv = (c & 2) == 0 ? -1 : 1, sw = (c & 4) == 0 ? -1 : 1;
        return new(su * pv * pw, pu * sv * pw, pu * pv * sw);
    }
}
