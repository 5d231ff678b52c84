using System.Text;
using System.Text.Json;
using Xunit;

namespace Qc.Evidence.Tests;

public class CanonicalJsonTests
{
    [Theory]
    // Number samples of RFC 8785, appendix B, written as the doubles they stand for (from memory).
    [InlineData("0.0", "0")]
    [InlineData("-0.0", "0")]
    [InlineData("4.5", "4.5")]
    [InlineData("2e-3", "0.002")]
    [InlineData("1E30", "1e+30")]
    [InlineData("333333333.33333329", "333333333.3333333")]
    [InlineData("0.000000000000000000000000001", "1e-27")]
    [InlineData("5e-324", "5e-324")]
    [InlineData("1.7976931348623157e308", "1.7976931348623157e+308")]
    [InlineData("9007199254740992", "9007199254740992")]
    [InlineData("295147905179352830000", "295147905179352830000")]
    [InlineData("1e21", "1e+21")]
    [InlineData("999999999999999900000", "999999999999999900000")]
    [InlineData("0.000001", "0.000001")]
    [InlineData("1e-7", "1e-7")]
    [InlineData("-1.5", "-1.5")]
    [InlineData("100", "100")]
    public void Numbers_are_written_as_ECMAScript_prints_them(string json, string expected) =>
        Assert.Equal(expected, Encoding.UTF8.GetString(CanonicalJson.Of(json)));

    [Fact]
    public void Members_are_sorted_by_UTF16_units_and_strings_have_the_shortest_escapes()
    {
        // After the example of RFC 8785, section 3.2.2 (from memory).
        const string json = """{"numbers":[333333333.33333329,1E30,4.50],"string":"\u20ac$\u000F\u000aA'\u0042\u0022\u005c\\\"\/","literals":[null,true,false]}""";
        const string expected = """{"literals":[null,true,false],"numbers":[333333333.3333333,1e+30,4.5],"string":"€$\u000f\nA'B\"\\\\\"/"}""";
        Assert.Equal(expected, Encoding.UTF8.GetString(CanonicalJson.Of(json)));
    }

    [Fact]
    public void Order_of_members_and_white_space_do_not_change_the_bytes() =>
        Assert.Equal(CanonicalJson.Of("""{"b":1,"a":{"d":2,"c":3}}"""), CanonicalJson.Of(""" { "a" : { "c":3, "d":2.0 } , "b":1e0 } """));

    [Fact]
    public void A_name_outside_the_basic_plane_sorts_by_its_first_surrogate() =>
        Assert.Equal("{\"\U0001F600\":1,\"\uFB33\":2}", Encoding.UTF8.GetString(CanonicalJson.Of("""{"\ufb33":2,"\ud83d\ude00":1}""")));

    [Fact]
    public void A_number_beyond_a_double_is_refused() =>
        Assert.Throws<NotSupportedException>(() => CanonicalJson.Of("1e400"));

    [Fact]
    public void A_member_that_occurs_twice_is_refused() =>
        Assert.ThrowsAny<Exception>(() => CanonicalJson.Of("""{"a":1,"a":2}"""));

    [Fact]
    public void What_is_not_json_is_refused() => Assert.ThrowsAny<JsonException>(() => CanonicalJson.Of("{"));
}
