using System.Globalization;
using Qc.Engine.Tests.Processing;

namespace Qc.Benchmarks;

/// <summary>"report lines [draws]": how near fitted places and areas come to the Cramér–Rao bound, over S/N.</summary>
internal static class LineReport
{
    private static readonly double[] Ratios = [5, 7, 10, 20, 30, 50, 100, 300, 1000, 10000];

    public static void Print(string[] arguments)
    {
        int draws = arguments.Length > 0 ? int.Parse(arguments[0], CultureInfo.InvariantCulture) : 2000;
        Reports.Say($"{draws} draws; deviation and stated uncertainty over the bound, bias over the bound; S/N = height / noise");
        Console.WriteLine("lines     width    S/N     place dev.  area dev.  place bias  area bias  stated place  stated area  failed");
        foreach (bool pair in new[] { false, true })
        {
            foreach (bool known in new[] { true, false })
            {
                foreach (double ratio in Ratios)
                {
                    LineFitFigures f = LineFitStudy.Run(pair, known, ratio, draws);
                    bool holds = Math.Max(f.PlaceDeviation, f.AreaDeviation) <= 1.15 && Math.Max(Math.Abs(f.PlaceBias), Math.Abs(f.AreaBias)) < 1 / 3.0;
                    Reports.Say(
                        $"{(pair ? "pair" : "single"),-9} {(known ? "known" : "fitted"),-7}  {ratio,-6}  {f.PlaceDeviation,10:F3}  {f.AreaDeviation,9:F3}  {f.PlaceBias,10:F3}  {f.AreaBias,9:F3}  {f.StatedPlace,12:F3}  {f.StatedArea,11:F3}  {f.Failed,6}  {(holds ? "within the bar" : "outside")}");
                }
            }
        }
    }
}
