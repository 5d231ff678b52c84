using Xunit;

namespace Qc.Certificates.Tests;

public class SpectrumDrawingTests
{
    [Fact]
    public void A_line_one_point_wide_survives_decimation_at_any_place()
    {
        for (int place = 0; place < 16384; place += 97)
        {
            var points = new float[16384];
            points[place] = 1;
            IReadOnlyList<(double Place, float Low, float High)> kept = SpectrumDrawing.Decimate(points, SpectrumDrawing.Columns);
            (double at, _, _) = Assert.Single(kept, k => k.High == 1);
            Assert.InRange(at - (place / 16384.0), -1.0 / SpectrumDrawing.Columns, 1.0 / SpectrumDrawing.Columns);
        }
    }

    [Fact]
    public void Fewer_points_than_columns_are_all_kept() =>
        Assert.Equal([3f, 1f, 2f], SpectrumDrawing.Decimate([3, 1, 2], 750).Select(k => k.High));
}
