using System.Buffers.Binary;
using System.IO.Compression;

using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Tests.Files.Regions;

/// <summary>A plain reader for the package's label volumes, independent of the program's: little-endian NIfTI-1, unsigned bytes, sform affine, gzip.</summary>
internal sealed class LabelVolume
{
    private readonly byte[] _bytes;
    private readonly int _nx, _ny, _nz, _offset;
    private readonly double[] _affine = new double[12];

    public LabelVolume(string file)
    {
        using GZipStream gzip = new(File.OpenRead(file), CompressionMode.Decompress);
        using MemoryStream all = new();
        gzip.CopyTo(all);
        _bytes = all.ToArray();
        Assert.Equal(348, BinaryPrimitives.ReadInt32LittleEndian(_bytes));
        short Int16(int at) => BinaryPrimitives.ReadInt16LittleEndian(_bytes.AsSpan(at));
        float Float(int at) => BinaryPrimitives.ReadSingleLittleEndian(_bytes.AsSpan(at));
        (_nx, _ny, _nz) = (Int16(42), Int16(44), Int16(46));
        Assert.Equal(2, Int16(70));
        Assert.True(Int16(254) > 0, "the volume has no sform");
        _offset = (int)Float(108);
        for (int k = 0; k < 12; k++)
        {
            _affine[k] = Float(280 + 4 * k);
        }
    }

    /// <summary>World positions [m] of the voxels with any of the labels on one side of x = 0: sides are told by position, never by label.</summary>
    public Vec3[] Voxels(HashSet<int> labels, int side)
    {
        List<Vec3> voxels = [];
        for (int k = 0, at = _offset; k < _nz; k++)
        {
            for (int j = 0; j < _ny; j++)
            {
                for (int i = 0; i < _nx; i++, at++)
                {
                    if (labels.Contains(_bytes[at]))
                    {
                        Vec3 w = new(Row(0, i, j, k), Row(4, i, j, k), Row(8, i, j, k));
                        if (side == 0 || Math.Sign(w.X) == side)
                        {
                            voxels.Add(w / 1000);
                        }
                    }
                }
            }
        }

        return [.. voxels];
    }

    private double Row(int r, int i, int j, int k) => _affine[r] * i + _affine[r + 1] * j + _affine[r + 2] * k + _affine[r + 3];
}
