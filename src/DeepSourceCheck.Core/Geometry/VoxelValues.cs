using System.Numerics;

namespace DeepSourceCheck.Core.Geometry;

/// <summary>The values of a volume in the compact type of their file; converted to double a stretch at a time.</summary>
public abstract class VoxelValues
{
    /// <summary>Number of values.</summary>
    public abstract int Count { get; }

    /// <summary>Overwrites <paramref name="target"/> with the values from <paramref name="start"/> on, scaling applied.</summary>
    public abstract void CopyTo(int start, Span<double> target);

    /// <summary>One value, scaling applied, without unit.</summary>
    public double this[int index]
    {
        get
        {
            Span<double> one = stackalloc double[1];
            CopyTo(index, one);
            return one[0];
        }
    }

    /// <summary>Values slope x + intercept of an array that is kept, not copied.</summary>
    public static VoxelValues Of<T>(T[] stored, double slope = 1.0, double intercept = 0.0)
        where T : unmanaged, INumberBase<T> => new Typed<T>(stored, slope, intercept);

    private sealed class Typed<T>(T[] stored, double slope, double intercept) : VoxelValues
        where T : unmanaged, INumberBase<T>
    {
        private readonly bool _scaled = slope != 1.0 || intercept != 0.0;

        public override int Count => stored.Length;

        public override void CopyTo(int start, Span<double> target)
        {
            ReadOnlySpan<T> source = stored.AsSpan(start, target.Length);
            for (int n = 0; n < target.Length; n++)
            {
                target[n] = double.CreateTruncating(source[n]);
            }

            if (_scaled)
            {
                for (int n = 0; n < target.Length; n++)
                {
                    target[n] = slope * target[n] + intercept;
                }
            }
        }
    }
}
