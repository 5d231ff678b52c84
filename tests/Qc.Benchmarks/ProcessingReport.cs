using System.Globalization;
using Qc.Engine.Tests.Processing;

namespace Qc.Benchmarks;

/// <summary>"report processing [cases] [first]": phase and baseline of made FIDs against their truth.</summary>
internal static class ProcessingReport
{
    private const double PhaseBarDegrees = 1;
    private const double BaselineBar = 0.002;

    public static void Print(string[] arguments)
    {
        int cases = arguments.Length > 0 ? int.Parse(arguments[0], CultureInfo.InvariantCulture) : 200;
        int start = arguments.Length > 1 ? int.Parse(arguments[1], CultureInfo.InvariantCulture) : 1;
        var phases = new List<double>();
        var baselines = new List<double>();
        Console.WriteLine("Cases outside a bar:");
        for (int seed = start; seed < start + cases; seed++)
        {
            StudyCase made = ProcessingStudy.Make(seed);
            StudyFigures f = ProcessingStudy.Judge(made);
            phases.Add(f.WorstPhaseDegrees);
            baselines.Add(f.WorstBaseline);
            if (f.WorstPhaseDegrees > PhaseBarDegrees || f.WorstBaseline > BaselineBar)
            {
                Reports.Say($"  seed {seed,4}  {made.Fid.Facts.ObserveFrequencyMHz,4:F0} MHz  S/N {made.SignalToNoise,5:F0}  first order {made.FirstRadians * 180 / Math.PI,5:F0}  phase off {f.WorstPhaseDegrees,6:F2} (noise allows {f.PossiblePhaseDegrees:F2})  baseline off {100 * f.WorstBaseline:F2} %");
            }
        }

        Reports.Say($"{cases} FIDs: phase within {PhaseBarDegrees} degree in {phases.Count(p => p <= PhaseBarDegrees)}, baseline within {100 * BaselineBar} % of the largest signal in {baselines.Count(b => b <= BaselineBar)}.");
        Say("phase (degrees)", phases, 1);
        Say("baseline (%)", baselines, 100);
    }

    private static void Say(string what, List<double> values, double scale)
    {
        double[] sorted = [.. values.Order().Select(v => scale * v)];
        Reports.Say($"{what}: median {sorted[sorted.Length / 2]:F3}, 95 % {sorted[(int)(0.95 * (sorted.Length - 1))]:F3}, largest {sorted[^1]:F3}");
    }
}
