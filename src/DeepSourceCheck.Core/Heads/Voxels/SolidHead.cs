using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Heads.Voxels;

// Which air is outside. The flood starts at the border of the volume, but a nostril or an ear canal connects the sinuses to the border, and a windpipe opens where the
// neck is cut. So
//  1. tissue is widened by 4 mm along each axis: passages narrower than 8 mm close, and the flood runs through what is left;
//  2. faces of the volume that the head is cut at (touched over more than a twentieth) let no flood in, except along the edges of the volume;
//  3. the flood then grows back through the air beside it by as many voxels as the widening took, so that open hollows (eyes, auricles) are outside again and a
//     nostril is entered by little more than a centimetre;
//  4. what is thinner than about 6 mm sticks out like an auricle and is left out (an opening by a cube): electrodes behind the ear sit on the head, not on the ear. A
//     head's own curvature loses nothing: a cube of 6 mm in a sphere of 92 mm comes within 0.1 mm of it.

/// <summary>The head without its cavities: every voxel in the box around it that is not outside air.</summary>
internal sealed class SolidHead
{
    /// <summary>Passages of air narrower than twice this do not let the outside in [m].</summary>
    public const double ClosedHalfWidth = 0.004;

    /// <summary>What is thinner than twice this along an axis is an auricle or the like [m].</summary>
    public const double ThinHalfWidth = 0.003;

    /// <summary>Share of a face of the volume that the head covers, above which the head counts as cut there.</summary>
    public const double CutShare = 0.05;

    private const byte Air = 0, Solid = 1, Wall = 2, Outside = 3;

    private readonly int[] _stride;

    private SolidHead((int I, int J, int K) first, int nx, int ny, int nz, byte[] state)
    {
        (First, Nx, Ny, Nz, State) = (first, nx, ny, nz, state);
        _stride = [1, nx, nx * ny];
    }

    /// <summary>Voxel of the volume at the box's corner; negative where the box reaches beyond the volume.</summary>
    public (int I, int J, int K) First { get; }

    /// <summary>Size of the box along the first axis.</summary>
    public int Nx { get; }

    /// <summary>Size of the box along the second axis.</summary>
    public int Ny { get; }

    /// <summary>Size of the box along the third axis.</summary>
    public int Nz { get; }

    private byte[] State { get; }

    /// <summary>True for head and cavities.</summary>
    public bool this[int index] => State[index] is Solid or Air;

    /// <summary>Voxels that the head touches on each face of the volume as a share of the face: low and high of each axis.</summary>
    public double[] Contact { get; } = new double[6];

    /// <summary>True where the head is cut by a face of the volume: low and high of each axis.</summary>
    public bool IsCut(int face) => Contact[face] > CutShare;

    /// <summary>Finds the head in a volume.</summary>
    /// <param name="volume">The head.</param>
    /// <param name="margin">Voxels beyond the head along each axis that the box must hold.</param>
    /// <exception cref="ArgumentException">Every voxel is air.</exception>
    public static SolidHead Of(TissueVolume volume, (int X, int Y, int Z) margin)
    {
        VoxelGrid grid = volume.Grid;
        (int[] low, int[] high) = Bounds(volume);
        int[] size = [grid.Nx, grid.Ny, grid.Nz], pads = [margin.X, margin.Y, margin.Z], half = new int[3], thin = new int[3], first = new int[3], n = new int[3];
        for (int a = 0; a < 3; a++)
        {
            half[a] = Math.Max(1, (int)Math.Round(ClosedHalfWidth / grid.ToWorld.Column(a).Norm));
            thin[a] = Math.Max(1, (int)(ThinHalfWidth / grid.ToWorld.Column(a).Norm));
            int pad = Math.Max(half[a] + 3, pads[a]);
            first[a] = low[a] - pad;
            n[a] = high[a] - low[a] + 1 + 2 * pad;
        }

        SolidHead head = new((first[0], first[1], first[2]), n[0], n[1], n[2], new byte[checked(n[0] * n[1] * n[2])]);
        head.Fill(volume, low, high);
        for (int face = 0; face < 6; face++)
        {
            int a = face / 2;
            bool touches = face % 2 == 0 ? low[a] == 0 : high[a] == size[a] - 1;
            head.Contact[face] = touches ? ContactShare(volume, a, face % 2 == 0 ? 0 : size[a] - 1) : 0;
        }

        head.Enclose(size);
        head.Flood(head.Widened(half, state => state == Solid), size);
        head.GrowBack(half.Sum() + 1);
        head.LeaveOutThinParts(thin);
        return head;
    }

    private static (int[] Low, int[] High) Bounds(TissueVolume volume)
    {
        VoxelGrid grid = volume.Grid;
        int[] low = [int.MaxValue, int.MaxValue, int.MaxValue], high = [-1, -1, -1];
        for (int k = 0; k < grid.Nz; k++)
        {
            for (int j = 0; j < grid.Ny; j++)
            {
                ReadOnlySpan<byte> row = volume.Cells.Slice(grid.Index(0, j, k), grid.Nx);
                int from = row.IndexOfAnyExcept((byte)0);
                if (from < 0)
                {
                    continue;
                }

                (low[0], high[0]) = (Math.Min(low[0], from), Math.Max(high[0], row.LastIndexOfAnyExcept((byte)0)));
                (low[1], high[1]) = (Math.Min(low[1], j), Math.Max(high[1], j));
                (low[2], high[2]) = (Math.Min(low[2], k), Math.Max(high[2], k));
            }
        }

        return high[0] >= 0 ? (low, high) : throw new ArgumentException("Every voxel is air.", nameof(volume));
    }

    private static double ContactShare(TissueVolume volume, int axis, int at)
    {
        VoxelGrid grid = volume.Grid;
        int[] n = [grid.Nx, grid.Ny, grid.Nz];
        (int u, int v) = ((axis + 1) % 3, (axis + 2) % 3);
        int touched = 0;
        Span<int> p = stackalloc int[3];
        p[axis] = at;
        for (p[u] = 0; p[u] < n[u]; p[u]++)
        {
            for (p[v] = 0; p[v] < n[v]; p[v]++)
            {
                touched += volume.Cells[grid.Index(p[0], p[1], p[2])] != 0 ? 1 : 0;
            }
        }

        return touched / ((double)n[u] * n[v]);
    }

    private void Fill(TissueVolume volume, int[] low, int[] high)
    {
        for (int k = low[2]; k <= high[2]; k++)
        {
            for (int j = low[1]; j <= high[1]; j++)
            {
                ReadOnlySpan<byte> row = volume.Cells.Slice(volume.Grid.Index(low[0], j, k), high[0] - low[0] + 1);
                int at = low[0] - First.I + Nx * (j - First.J + Ny * (k - First.K));
                for (int i = 0; i < row.Length; i++)
                {
                    State[at + i] = row[i] != 0 ? Solid : Air;
                }
            }
        }
    }

    /// <summary>Walls: the outermost layer of the box, so that neighbours need no bounds, and what lies beyond a face at which the head is cut.</summary>
    private void Enclose(int[] size)
    {
        int at = 0;
        for (int k = 0; k < Nz; k++)
        {
            for (int j = 0; j < Ny; j++)
            {
                for (int i = 0; i < Nx; i++, at++)
                {
                    if (i == 0 || j == 0 || k == 0 || i == Nx - 1 || j == Ny - 1 || k == Nz - 1
                        || Beyond(First.I + i, size[0], 0) || Beyond(First.J + j, size[1], 2) || Beyond(First.K + k, size[2], 4))
                    {
                        State[at] = Wall;
                    }
                }
            }
        }
    }

    private bool Beyond(int voxel, int size, int lowFace) => (voxel < 0 && IsCut(lowFace)) || (voxel >= size && IsCut(lowFace + 1));

    /// <summary>Voxels of some states widened by a number of voxels along each axis in turn.</summary>
    private byte[] Widened(int[] half, Func<byte, bool> which)
    {
        byte[] wide = new byte[State.Length];
        bool[] chosen = [.. Enumerable.Range(0, 4).Select(state => which((byte)state))];
        for (int at = 0; at < wide.Length; at++)
        {
            wide[at] = chosen[State[at]] ? Solid : Air;
        }

        Widen(wide, half);
        return wide;
    }

    private void Widen(byte[] wide, int[] half)
    {
        int[] n = [Nx, Ny, Nz];
        for (int a = 0; a < 3; a++)
        {
            int step = _stride[a], slab = step * n[a];
            for (int corner = 0; corner < wide.Length; corner += slab)
            {
                for (int line = corner; line < corner + step; line++)
                {
                    Widen(wide, line, step, n[a], half[a]);
                }
            }
        }
    }

    private static void Widen(byte[] wide, int line, int step, int length, int width)
    {
        // What was added is marked apart, so that it does not widen in its turn.
        const byte Added = 4;
        int last = -width - 1;
        for (int i = 0, at = line; i < length; i++, at += step)
        {
            if (wide[at] == Solid)
            {
                last = i;
            }
            else if (i - last <= width)
            {
                wide[at] = Added;
            }
        }

        int next = length + width;
        for (int i = length - 1, at = line + (length - 1) * step; i >= 0; i--, at -= step)
        {
            if (wide[at] == Solid)
            {
                next = i;
            }
            else if (next - i <= width)
            {
                wide[at] = Added;
            }
        }

        for (int i = 0, at = line; i < length; i++, at += step)
        {
            wide[at] = wide[at] == Added ? Solid : wide[at];
        }
    }

    private void Flood(byte[] wide, int[] size)
    {
        Stack<int> open = new();
        void Enter(int at)
        {
            if (State[at] == Air && wide[at] == Air)
            {
                State[at] = Outside;
                open.Push(at);
            }
        }

        for (int k = 1; k < Nz - 1; k++)
        {
            for (int j = 1; j < Ny - 1; j++)
            {
                bool rim = k == 1 || j == 1 || k == Nz - 2 || j == Ny - 2;
                int row = Nx * (j + Ny * k);
                int edges = OnFace(First.J + j, size[1]) + OnFace(First.K + k, size[2]);
                for (int i = 1; i < Nx - 1; i++)
                {
                    if (rim || i == 1 || i == Nx - 2 || edges + OnFace(First.I + i, size[0]) >= 2)
                    {
                        Enter(row + i);
                    }
                }
            }
        }

        while (open.TryPop(out int at))
        {
            foreach (int step in _stride)
            {
                Enter(at - step);
                Enter(at + step);
            }
        }
    }

    private static int OnFace(int voxel, int size) => voxel == 0 || voxel == size - 1 ? 1 : 0;

    private void GrowBack(int steps)
    {
        List<int> front = [];
        for (int at = 0; at < State.Length; at++)
        {
            if (State[at] == Air && BesideOutside(at))
            {
                front.Add(at);
            }
        }

        for (int step = 0; step < steps && front.Count > 0; step++)
        {
            foreach (int at in front)
            {
                State[at] = Outside;
            }

            List<int> next = [];
            foreach (int at in front)
            {
                foreach (int stride in _stride)
                {
                    AddAir(next, at - stride);
                    AddAir(next, at + stride);
                }
            }

            front = [.. next.Distinct()];
        }
    }

    private void LeaveOutThinParts(int[] half)
    {
        // Opening: what the outside does not reach when it widens, widened by as much. The cut of the neck is not thin: walls do not widen.
        byte[] kept = Widened(half, state => state == Outside);
        for (int at = 0; at < kept.Length; at++)
        {
            kept[at] = this[at] && kept[at] == Air ? Solid : Air;
        }

        Widen(kept, half);
        for (int at = 0; at < kept.Length; at++)
        {
            State[at] = this[at] && kept[at] == Air ? Outside : State[at];
        }
    }

    private bool BesideOutside(int at)
    {
        foreach (int stride in _stride)
        {
            if (State[at - stride] == Outside || State[at + stride] == Outside)
            {
                return true;
            }
        }

        return false;
    }

    private void AddAir(List<int> list, int at)
    {
        if (State[at] == Air)
        {
            list.Add(at);
        }
    }
}
