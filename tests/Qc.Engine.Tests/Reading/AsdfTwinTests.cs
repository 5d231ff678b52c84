using CsCheck;
using Xunit;

namespace Qc.Engine.Tests.Reading;

/// <summary>The decoder and its slow twin agree on random mixtures of all forms.</summary>
public class AsdfTwinTests
{
    private static readonly Gen<string> s_digits = Gen.Int[0, 9999].Select(i => i == 0 ? "" : FormattableString.Invariant($"{i}"));

    private static readonly Gen<string> s_absolute = Gen.Select(Gen.Char["@ABCDEFGHIabcdefghi"], s_digits).Select((c, d) => c + d);

    private static readonly Gen<string> s_token = Gen.OneOf(
        s_absolute,
        Gen.Int[-500, 500].Select(i => FormattableString.Invariant($" {i}")),
        Gen.Int[0, 500].Select(i => FormattableString.Invariant($"+{i}")),
        Gen.Select(Gen.Char["%JKLMNOPQRjklmnopqr"], s_digits).Select((c, d) => c + d),
        Gen.Char["STUVWXYZs"].Select(c => c.ToString()));

    [Fact]
    public void Random_lines_give_the_same_ordinates() =>
        Gen.Select(s_absolute, s_token.Array[0, 30]).Array[1, 12].Sample(
            lines =>
            {
                var table = "";
                foreach (var (first, rest) in lines)
                {
                    // A line after one that ended in a difference opens with the ordinate reached, as the standard asks.
                    var before = ReferenceAsdfDecoder.Decode(table);
                    var check = ReferenceAsdfDecoder.Decode(table + "0 77777\n").Count == before.Count && before.Count > 0
                        ? FormattableString.Invariant($" {before[^1]}")
                        : first;
                    table += FormattableString.Invariant($"{before.Count}") + check + string.Concat(rest) + "\n";
                }

                var expected = ReferenceAsdfDecoder.Decode(table);
                if (expected.Count >= 4)
                {
                    Assert.Equal(expected, Jcamp.Spectrum(Jcamp.WithTable(table, expected.Count, 10 * (expected.Count - 1))).Real);
                }
            },
            iter: 500,
            seed: "0000KVbJm3K5");
}
