using System.Globalization;
using Qc.Engine.Structures;
using Xunit;

namespace Qc.Engine.Tests.Structures;

/// <summary>
/// The groups of every molecule of the list against its printed signals. Exchangeable protons are compared as a sum, because the
/// list prints one averaged signal for them. Fixed ones must match count for count, but for the rows of <see cref="Merged"/>,
/// where the list prints one signal for groups whose shifts happen to lie together: there, whole groups must make up each signal.
/// </summary>
public sealed class TopicityListTests(StructureFixture fixture) : IClassFixture<StructureFixture>
{
    private static readonly Dictionary<string, string> Merged = new()
    {
        ["E08"] = "the diastereotopic CH2 beside the stereocentre is printed as one multiplet",
        ["A06"] = "the diastereotopic CH2 beside the stereocentre is printed as one multiplet",
        ["R02"] = "H2/6 and H4 of toluene overlap",
        ["R05"] = "all ring protons of o-xylene overlap",
        ["R06"] = "H4/6 and H2 of m-xylene overlap",
        ["R14"] = "H4/6 and H5 of 1,3-dichlorobenzene overlap",
        ["R21"] = "meta and para protons of the phenyl ring overlap",
        ["H07"] = "all ring protons of benzyl bromide overlap",
    };

    public static TheoryData<string, string, string> Molecules()
    {
        var data = new TheoryData<string, string, string>();
        foreach (string[] row in ReferenceFile.Rows("molecules.txt", '|'))
        {
            data.Add(row[0], row[2], row[6]);
        }

        return data;
    }

    [Fact]
    public void The_list_is_whole() => Assert.Equal(87, Molecules().Count);

    [Theory]
    [MemberData(nameof(Molecules))]
    public void Groups_are_the_printed_signals(string id, string smiles, string signals)
    {
        (int Count, bool Exchanges)[] printed = [.. signals.Split(';').Select(SignalOf)];
        ProtonGroups found = Topicity.Groups(fixture.Read(smiles));

        Assert.Equal(
            printed.Where(signal => signal.Exchanges).Sum(signal => signal.Count),
            found.Groups.Where(group => group.Lability == Lability.Exchangeable).Sum(group => group.Count));
        List<int> expected = [.. printed.Where(signal => !signal.Exchanges).Select(signal => signal.Count).OrderDescending()];
        List<int> actual = [.. found.Groups.Where(group => group.Lability == Lability.Fixed).Select(group => group.Count).OrderDescending()];
        if (Merged.ContainsKey(id))
        {
            Assert.NotEqual(expected, actual);
            Assert.True(MakeUp(expected, actual), $"{string.Join(' ', actual)} do not make up {string.Join(' ', expected)}");
        }
        else
        {
            Assert.Equal(expected, actual);
        }
    }

    private static (int Count, bool Exchanges) SignalOf(string signal)
    {
        string[] words = signal.Split(' ', StringSplitOptions.RemoveEmptyEntries);
        return (int.Parse(words[3], CultureInfo.InvariantCulture), words[4].TrimEnd('~').EndsWith('x'));
    }

    private static bool MakeUp(List<int> signals, List<int> groups)
    {
        if (groups.Count == 0)
        {
            return signals.TrueForAll(signal => signal == 0);
        }

        return Enumerable.Range(0, signals.Count).Any(i => signals[i] >= groups[0] && MakeUp(
            [.. signals.Select((signal, k) => k == i ? signal - groups[0] : signal)], groups[1..]));
    }
}
