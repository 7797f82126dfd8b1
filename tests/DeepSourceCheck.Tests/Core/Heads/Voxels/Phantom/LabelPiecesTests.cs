using CsCheck;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels.Phantom;
using DeepSourceCheck.Tests.References;

namespace DeepSourceCheck.Tests.Core.Heads.Voxels.Phantom;

public class LabelPiecesTests
{
    private const string Seed = "0000N4pIRVB1";

    [Fact]
    public void Absorb_EqualsFillingFromVoxelToVoxel() =>
        Gen.Select(Gen.Int[1, 7], Gen.Int[1, 6], Gen.Int[1, 5], Gen.Int[1, 12]).SelectMany((nx, ny, nz, smallest) =>
            Gen.Byte[0, 2].Array[nx * ny * nz].Select(labels => (nx, ny, nz, smallest, labels))).Sample(x =>
            {
                (int nx, int ny, int nz, int smallest, byte[] labels) = x;

                // A volume of one small piece has nothing around it.
                if (labels.Distinct().Count() == 1)
                {
                    return;
                }

                VoxelGrid grid = new(nx, ny, nz, Affine.Identity);
                byte[] expected = PlainPieces.Absorbed(labels, grid, smallest), actual = [.. labels];
                LabelPieces.Absorb(actual, grid, smallest);
                Assert.Equal(expected, actual);
            }, seed: Seed, iter: 2000);
}
