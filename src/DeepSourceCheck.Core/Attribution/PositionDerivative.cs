using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;

namespace DeepSourceCheck.Core.Attribution;

// PositionDerivative.cs - how a leadfield changes as its dipole moves.
//   dL/dr_i = [L(r + h e_i) - L(r - h e_i)] / (2 h), the step h of the source (ILeadfieldSource.PositionStep).
//   Error: truncation h^2 L'''/6, relative to L' about (h/R)^2 with R the distance to the nearest sensor or layer; rounding of L times R/h.
//   In spheres h = 10 um: below 1e-6 of the largest derivative, which reference case 14 holds. In voxels h is the voxel: the leadfield is a smooth function of place only
//   over distances of a voxel, and (h/R)^2 is some 1e-3.
//   Where one of the two places is refused (a border), the difference is one-sided.

/// <summary>Central differences of leadfields over place. One a thread.</summary>
public sealed class PositionDerivative
{
    private readonly ILeadfieldSource _source;
    private readonly IHead _head;
    private readonly double _step;
    private readonly double[] _span = new double[3];

    /// <param name="source">Leadfields; must state a step.</param>
    /// <param name="head">Which places it admits.</param>
    /// <exception cref="ArgumentException">The source knows no places between its points.</exception>
    public PositionDerivative(ILeadfieldSource source, IHead head)
    {
        _source = source;
        _head = head;
        _step = source.PositionStep ?? throw new ArgumentException("Leadfields that are given point by point have no derivative.", nameof(source));
        Block = new LeadfieldBlock(source.EegRows, source.MegRows);
    }

    /// <summary>The block that <see cref="Fill"/> loads: lane 0 the dipole, then places up and down each axis.</summary>
    public LeadfieldBlock Block { get; }

    /// <summary>Loads a dipole and its displaced places.</summary>
    /// <param name="position">Place [m], admitted by the head.</param>
    /// <returns>False where along some axis both displaced places are refused: there is no derivative.</returns>
    public bool Fill(Vec3 position)
    {
        Span<Vec3> places = stackalloc Vec3[7];
        places[0] = position;
        for (int axis = 0; axis < 3; axis++)
        {
            Vec3 shift = new(axis == 0 ? _step : 0, axis == 1 ? _step : 0, axis == 2 ? _step : 0);
            Vec3 up = position + shift, down = position - shift;
            bool upRefused = _head.WhyRefused(up) is not null, downRefused = _head.WhyRefused(down) is not null;
            if (upRefused && downRefused)
            {
                return false;
            }

            places[1 + 2 * axis] = up = upRefused ? position : up;
            places[2 + 2 * axis] = down = downRefused ? position : down;
            _span[axis] = (up - down)[axis];
        }

        Block.Load(places, default);
        _source.Fill(Block);
        return true;
    }

    /// <summary>Reads leadfield and derivatives off rows that are linear in those of <see cref="Block"/>.</summary>
    /// <param name="rows">[row][moment axis][lane].</param>
    /// <param name="leadfield">L, [row][moment axis], in the unit of the rows; overwritten.</param>
    /// <param name="derivative">dL/dr, [row][moment axis][position axis], in that unit per m; overwritten.</param>
    public void Read(ReadOnlySpan<double> rows, Span<double> leadfield, Span<double> derivative)
    {
        for (int k = 0; k < leadfield.Length; k++)
        {
            ReadOnlySpan<double> lanes = rows.Slice(k * LeadfieldBlock.Lanes, LeadfieldBlock.Lanes);
            leadfield[k] = lanes[0];
            for (int axis = 0; axis < 3; axis++)
            {
                derivative[3 * k + axis] = (lanes[1 + 2 * axis] - lanes[2 + 2 * axis]) / _span[axis];
            }
        }
    }
}
