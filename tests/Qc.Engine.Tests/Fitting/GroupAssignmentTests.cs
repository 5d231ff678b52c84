using System.Collections.Immutable;
using Qc.Engine.Fitting;
using Qc.Engine.Processing;
using Qc.Engine.Values;
using Xunit;

namespace Qc.Engine.Tests.Fitting;

public class GroupAssignmentTests
{
    [Fact]
    public void Groups_go_to_the_signals_whose_area_and_place_fit()
    {
        // Propyl acetate in CDCl3 (CHECKVALUES E01, from memory): 2:3:2:3 at 4.02, 2.05, 1.65, 0.94.
        AssignableGroup[] groups = [Group(0, 3, 2.0), Group(1, 2, 4.1), Group(2, 2, 1.6), Group(3, 3, 1.0)];
        AssignableSignal[] signals = [Signal(4.02, 20), Signal(2.05, 30), Signal(1.65, 20), Signal(0.94, 30)];
        Assert.Equal([1, 0, 2, 3], GroupAssignment.Best(groups, signals, 1)[0].SignalOf.ToArray());
    }

    [Fact]
    public void Two_groups_share_a_signal_of_their_summed_area()
    {
        AssignableGroup[] groups = [Group(0, 3, 1.26), Group(1, 3, 1.14), Group(2, 2, 4.1)];
        AssignableSignal[] signals = [Signal(4.12, 20), Signal(1.20, 60, 0.15)];
        Assert.Equal([1, 1, 0], GroupAssignment.Best(groups, signals, 1)[0].SignalOf.ToArray());
    }

    [Fact]
    public void An_impurity_nearer_to_the_expected_place_does_not_take_the_group_when_its_area_is_wrong()
    {
        AssignableGroup[] groups = [Group(0, 2, 4.1), Group(1, 3, 2.0), Group(2, 6, 1.0)];
        AssignableSignal[] signals = [Signal(4.10, 0.6), Signal(3.95, 20), Signal(2.05, 30), Signal(0.94, 60)];
        Assert.Equal([1, 2, 3], GroupAssignment.Best(groups, signals, 1)[0].SignalOf.ToArray());
    }

    [Fact]
    public void A_group_without_any_signal_near_it_is_absent()
    {
        AssignableGroup[] groups = [Group(0, 1, 8.1), Group(1, 3, 2.0)];
        AssignableSignal[] signals = [Signal(2.05, 30)];
        Assert.Equal([-1, 0], GroupAssignment.Best(groups, signals, 1)[0].SignalOf.ToArray());
    }

    [Fact]
    public void A_strong_reference_claimed_beforehand_does_not_set_the_scale()
    {
        AssignableGroup[] groups = [Group(0, 2, 4.1), Group(1, 3, 1.3)];
        AssignableSignal[] signals = [Signal(4.12, 2), Signal(1.26, 3), Signal(0.0, 500) with { ForeignArea = 500, UnassignedCost = GroupAssignment.OwnedElsewhereCost }];
        Assignment best = GroupAssignment.Best(groups, signals, 1)[0];
        Assert.Equal([0, 1], best.SignalOf.ToArray());
        Assert.Equal(1, best.AreaPerProton, 0.1);
    }

    private static AssignableGroup Group(int index, int count, double ppm) => new(index, count, ppm, 0.12, 3);

    private static AssignableSignal Signal(double ppm, double area, double halfWidthPpm = 0.03) => new(
        new MeasuredSignal(
            new Interval(ppm - halfWidthPpm, ppm + halfWidthPpm), area, ppm, 3, [new Maximum(ppm * 400, area, area, 1)]),
        0,
        0,
        GroupAssignment.LargestUnassignedCost);
}
