using CsCheck;

using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Tests.Core.Geometry;

public class LevelLinesTests
{
    private const int Side = 41;

    // Linear interpolation of a quadratic field errs by an eighth of its second derivative over the square of the spacing.
    private const double Circle = 0.02;

    private static double[] Field(Func<double, double, double> value) => [.. Enumerable.Range(0, Side * Side).Select(at => value(at % Side, at / Side))];

    [Fact]
    public void Lines_OfARoundHill_AreOneCircleCounterclockwise()
    {
        IReadOnlyList<(double X, double Y)> line = Assert.Single(LevelLines.Of(Field((x, y) => 150 - (x - 20.3) * (x - 20.3) - (y - 18.6) * (y - 18.6)), Side, Side, 25));
        Assert.All(line, p => Assert.InRange(Math.Sqrt((p.X - 20.3) * (p.X - 20.3) + (p.Y - 18.6) * (p.Y - 18.6)), Math.Sqrt(125) - Circle, Math.Sqrt(125) + Circle));
        Assert.InRange(PlaneLine.Area(line), 0.99 * Math.PI * 125, Math.PI * 125);
    }

    [Fact]
    public void Lines_OfARing_AreAnOuterBorderAndAHoleClockwise()
    {
        double[] areas = [.. LevelLines.Of(Field((x, y) => -Math.Abs(Math.Sqrt((x - 20) * (x - 20) + (y - 20) * (y - 20)) - 10)), Side, Side, -3).Select(PlaneLine.Area).Order()];
        Assert.Equal(2, areas.Length);
        Assert.InRange(areas[0], -Math.PI * 49, -0.97 * Math.PI * 49);
        Assert.InRange(areas[1], 0.97 * Math.PI * 169, Math.PI * 169);
    }

    [Theory]
    [InlineData(1.0, 2)]
    [InlineData(-1.0, 1)]
    public void Saddle_IsJoinedOrApartByItsMean(double otherCorners, int lines)
    {
        // Two corners of one cell at 2, the two others below the level of 1.6 or well below: the mean is 1.5 or 0.5; with the level at 0.4 the second pair stays outside and the mean inside.
        double level = otherCorners > 0 ? 1.6 : 0.4;
        Assert.Equal(lines, LevelLines.Of([2, otherCorners, otherCorners, 2], 2, 2, level).Count);
    }

    [Fact]
    public void Lines_OfAnyField_CloseAndHoldAsMuchAsTheyCross() => Gen.Double[-1, 1].Array[64].Sample(values =>
    {
        IReadOnlyList<IReadOnlyList<(double X, double Y)>> lines = LevelLines.Of(values, 8, 8, 0);
        int crossings = 0;
        for (int j = -1; j < 8; j++)
        {
            for (int i = -1; i < 8; i++)
            {
                crossings += (In(i, j) != In(i + 1, j) && j >= 0 ? 1 : 0) + (In(i, j) != In(i, j + 1) && i >= 0 ? 1 : 0);
            }
        }

        // Every border between an inner and an outer node is crossed once, and two corners of a line share a cell.
        Assert.Equal(crossings, lines.Sum(l => l.Count));
        foreach (IReadOnlyList<(double X, double Y)> line in lines)
        {
            for (int k = 0; k < line.Count; k++)
            {
                (double x, double y) = line[(k + 1) % line.Count];
                Assert.True(Math.Abs(line[k].X - x) <= 1 && Math.Abs(line[k].Y - y) <= 1);
            }
        }

        bool In(int i, int j) => i is >= 0 and < 8 && j is >= 0 and < 8 && values[i + 8 * j] >= 0;
    });

    [Fact]
    public void Simplified_KeepsEveryCornerWithinTheTolerance_WithFewCorners()
    {
        (double X, double Y)[] circle = [.. Enumerable.Range(0, 400).Select(k => (20 * Math.Cos(k * Math.PI / 200), 20 * Math.Sin(k * Math.PI / 200)))];
        IReadOnlyList<(double X, double Y)> simple = PlaneLine.Simplified(circle, 0.1);
        Assert.InRange(simple.Count, 8, 60);

        // The sagitta of a chord is what is given up: the corners that are left lie on the circle, the chords within 0.1 of it.
        for (int k = 0; k < simple.Count; k++)
        {
            (double x, double y) = simple[(k + 1) % simple.Count];
            Assert.InRange(Math.Sqrt((simple[k].X + x) * (simple[k].X + x) + (simple[k].Y + y) * (simple[k].Y + y)) / 2, 19.9, 20);
        }
    }
}
