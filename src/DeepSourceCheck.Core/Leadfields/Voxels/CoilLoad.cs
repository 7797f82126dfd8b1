using System.Buffers;
using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Numerics.Multigrid;
using DeepSourceCheck.Core.Sensors;

namespace DeepSourceCheck.Core.Leadfields.Voxels;

// CoilLoad.cs - right-hand sides of MEG channels.
//   Volume currents -sigma grad u give along d at r (law of Biot and Savart)  -mu0/(4 pi) int sigma grad u . g dx,  g(x) = R x d/|R|^3,  R = r - x. With u = sum u_j psi_j:
//     r_j = -mu0/(4 pi) int sigma grad psi_j . g dx, summed over a channel's points with their shares.
//   g = grad(1/|R|) x d has no divergence within the head. Where sigma is a number, Gauss' theorem in each element therefore leaves
//     r_j = -mu0/(4 pi) sum over faces (sigma_c - sigma_c') int psi_j g . n dS:
//   faces between elements that conduct alike drop out, and the load lives on the nodes of interfaces. Exact on any grid; elements with a tensor are integrated
//   over their volume (TensorCoilLoad).
//   Gauss points of a face do not sum to a flux of exactly zero out of each element: what is left (below 1e-5 of the load) is taken evenly from the interface nodes
//   of each connected piece, for a net current into a piece has no solution.
// Source: [Weinstein et al. 2000], [Gencer & Acar 2004] for the transfer matrix of MEG; the surface form is derived here.

/// <summary>Right-hand sides that read the magnetic field of volume currents at MEG channels, without the factor mu0/(4 pi).</summary>
/// <remarks>
/// Single precision, sixteen channels at once, one a lane. A face or element of size h at distance R from a coil is integrated to about 0.03 (h/R)^4 of itself.
/// Unit of an entry: S (S/m for planar gradiometers); times mu0/(4 pi) and a potential it is a field. Immutable.
/// </remarks>
public sealed class CoilLoad
{
    private const int Lanes = ILoadBlocks.Lanes;

    /// <summary>Vectors of a coil point: place (3), axis times share (3).</summary>
    private const int PointVectors = 6;

    /// <summary>Stands for a missing point: outside every head, with share 0.</summary>
    private const float Nowhere = 10;

    // Bilinear functions of a face at its Gauss points.
    private const float Near = (float)(TrilinearHexahedron.GaussHigh * TrilinearHexahedron.GaussHigh);
    private const float Beside = (float)(TrilinearHexahedron.GaussHigh * TrilinearHexahedron.GaussLow);
    private const float Far = (float)(TrilinearHexahedron.GaussLow * TrilinearHexahedron.GaussLow);

    private readonly InterfaceFaces _faces;
    private readonly TensorCoilLoad? _volume;
    private readonly IReadOnlyList<MegChannel> _channels;

    /// <param name="mesh">Elements.</param>
    /// <param name="channels">Channels; every point outside the head.</param>
    /// <param name="tensors">Tensors of some voxels, or null.</param>
    public CoilLoad(HexMesh mesh, IReadOnlyList<MegChannel> channels, ConductivityTensors? tensors)
    {
        _channels = channels;
        _faces = new(mesh, channels.Count > 0 ? tensors : null);
        _volume = tensors is { Count: > 0 } && channels.Count > 0 ? new(mesh, tensors, _faces.Origin) : null;
    }

    /// <summary>Number of channels.</summary>
    public int Count => _channels.Count;

    /// <summary>Number of nodes of interfaces: what the surface form fills.</summary>
    public int InterfaceNodes => _faces.Touched.Length;

    /// <summary>Adds the right-hand sides of channels from <paramref name="first"/> on to a block whose lanes are zero there.</summary>
    /// <param name="first">First channel.</param>
    /// <param name="count">Channels.</param>
    /// <param name="lane">Lane of the first.</param>
    /// <param name="values">[node][16 lanes].</param>
    public void Add(int first, int count, int lane, Span<float> values)
    {
        int points = 0;
        for (int c = first; c < first + count; c++)
        {
            points = Math.Max(points, _channels[c].Points.Count);
        }

        float[] table = ArrayPool<float>.Shared.Rent(points * PointVectors * Lanes);
        Span<float> coils = table.AsSpan(0, points * PointVectors * Lanes);
        Tabulate(_channels, first, count, lane, points, _faces.Origin, coils);
        ReadOnlySpan<Vector512<float>> vectors = MemoryMarshal.Cast<float, Vector512<float>>(coils);
        Span<Vector512<float>> nodes = MemoryMarshal.Cast<float, Vector512<float>>(values);
        AddFaces(vectors, points, nodes);
        _volume?.Add(vectors, points, nodes);
        ArrayPool<float>.Shared.Return(table);
    }

    /// <summary>R x d/|R|^3, summed over the points of sixteen channels, at one place.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    internal static void Field(
        ref Vector512<float> coils, int points, Vector512<float> x, Vector512<float> y, Vector512<float> z,
        out Vector512<float> gx, out Vector512<float> gy, out Vector512<float> gz)
    {
        (gx, gy, gz) = (default, default, default);
        for (int p = 0; p < points; p++)
        {
            ref Vector512<float> point = ref Unsafe.Add(ref coils, p * PointVectors);
            Vector512<float> rx = point - x, ry = Unsafe.Add(ref point, 1) - y, rz = Unsafe.Add(ref point, 2) - z;
            Vector512<float> dx = Unsafe.Add(ref point, 3), dy = Unsafe.Add(ref point, 4), dz = Unsafe.Add(ref point, 5);
            Vector512<float> r2 = Fma(rx, rx, Fma(ry, ry, rz * rz));
            Vector512<float> inverse = Vector512<float>.One / (r2 * Vector512.Sqrt(r2));
            gx = Fma(Fma(ry, dz, -(rz * dy)), inverse, gx);
            gy = Fma(Fma(rz, dx, -(rx * dz)), inverse, gy);
            gz = Fma(Fma(rx, dy, -(ry * dx)), inverse, gz);
        }
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector512<float> Fma(Vector512<float> a, Vector512<float> b, Vector512<float> c) => Vector512.MultiplyAddEstimate(a, b, c);

    // [point][x, y, z, share times axis x, y, z][lane]
    private static void Tabulate(IReadOnlyList<MegChannel> channels, int first, int count, int lane, int points, Vec3 origin, Span<float> coils)
    {
        coils.Clear();
        for (int p = 0; p < points; p++)
        {
            Span<float> of = coils.Slice(p * PointVectors * Lanes, PointVectors * Lanes);
            of[..(3 * Lanes)].Fill(Nowhere);
            for (int c = first; c < first + count; c++)
            {
                if (p < channels[c].Points.Count)
                {
                    CoilPoint point = channels[c].Points[p];
                    Vec3 place = point.Position - origin, axis = point.Share * point.Axis;
                    for (int a = 0; a < 3; a++)
                    {
                        of[a * Lanes + lane + c - first] = (float)place[a];
                        of[(3 + a) * Lanes + lane + c - first] = (float)axis[a];
                    }
                }
            }
        }
    }

    private void AddFaces(ReadOnlySpan<Vector512<float>> coils, int points, Span<Vector512<float>> values)
    {
        ref Vector512<float> coil = ref MemoryMarshal.GetReference(coils);
        ref Vector512<float> node = ref MemoryMarshal.GetReference(values);
        ref float place = ref MemoryMarshal.GetArrayDataReference(_faces.Points);
        var left = new (Vector512<double> Low, Vector512<double> High, int Nodes)[_faces.Pieces];
        for (int face = 0; face < _faces.Count; face++)
        {
            Vector512<float> f0 = Flux(ref place, ref coil, points), f1 = Flux(ref Unsafe.Add(ref place, InterfaceFaces.Stride), ref coil, points);
            Vector512<float> f2 = Flux(ref Unsafe.Add(ref place, 2 * InterfaceFaces.Stride), ref coil, points);
            Vector512<float> f3 = Flux(ref Unsafe.Add(ref place, 3 * InterfaceFaces.Stride), ref coil, points);
            place = ref Unsafe.Add(ref place, InterfaceFaces.PerFace * InterfaceFaces.Stride);

            Vector512<float> across = f1 + f2, along = f0 + f3;
            ReadOnlySpan<int> at = _faces.Nodes.AsSpan(face * InterfaceFaces.PerFace, InterfaceFaces.PerFace);
            Unsafe.Add(ref node, at[0]) -= Near * f0 + Beside * across + Far * f3;
            Unsafe.Add(ref node, at[1]) -= Near * f1 + Beside * along + Far * f2;
            Unsafe.Add(ref node, at[2]) -= Near * f2 + Beside * along + Far * f1;
            Unsafe.Add(ref node, at[3]) -= Near * f3 + Beside * across + Far * f0;
            (Vector512<double> low, Vector512<double> high) = Vector512.Widen(across + along);
            ref (Vector512<double> Low, Vector512<double> High, int Nodes) piece = ref left[_faces.PieceOfFace[face]];
            piece.Low += low;
            piece.High += high;
        }

        foreach (int piece in _faces.PieceOfTouched)
        {
            left[piece].Nodes++;
        }

        Vector512<float>[] shares = [.. left.Select(l => Vector512.Narrow(l.Low / Math.Max(1, l.Nodes), l.High / Math.Max(1, l.Nodes)))];
        for (int n = 0; n < _faces.Touched.Length; n++)
        {
            Unsafe.Add(ref node, _faces.Touched[n]) += shares[_faces.PieceOfTouched[n]];
        }
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector512<float> Flux(ref float point, ref Vector512<float> coils, int points)
    {
        Field(ref coils, points, Vector512.Create(point), Vector512.Create(Unsafe.Add(ref point, 1)), Vector512.Create(Unsafe.Add(ref point, 2)),
            out Vector512<float> gx, out Vector512<float> gy, out Vector512<float> gz);
        return Fma(Vector512.Create(Unsafe.Add(ref point, 3)), gx, Fma(Vector512.Create(Unsafe.Add(ref point, 4)), gy, Unsafe.Add(ref point, 5) * gz));
    }
}
