using System.Globalization;
using System.Xml.Linq;
using Xunit;

namespace Qc.Chemistry.Tests;

[Collection(ReaderCollection.Name)]
public sealed class DrawingTests(ReaderFixture fixture)
{
    private static readonly XNamespace Svg = "http://www.w3.org/2000/svg";

    [Fact]
    public void A_drawing_is_of_the_size_asked_for_in_the_ink_of_the_page_and_without_background()
    {
        string text = fixture.Reader.DrawSvg("CCO", 320, 240, numbered: false);
        XElement svg = XElement.Parse(text);

        Assert.Equal("320", svg.Attribute("width")!.Value);
        Assert.Equal("240", svg.Attribute("height")!.Value);
        Assert.Contains("currentColor", text, StringComparison.Ordinal);
        Assert.DoesNotContain("#000000", text, StringComparison.OrdinalIgnoreCase);
        Assert.DoesNotContain("#FFFFFF", text, StringComparison.OrdinalIgnoreCase);
        Assert.Empty(svg.Descendants(Svg + "rect"));
    }

    [Fact]
    public void Numbers_add_marks_for_every_atom()
    {
        int Shapes(bool numbered) => XElement.Parse(fixture.Reader.DrawSvg("CCCCO", 320, 240, numbered)).Descendants()
            .Count(element => element.Attribute("class")?.Value == "note");

        Assert.Equal(0, Shapes(numbered: false));
        Assert.Equal(5, Shapes(numbered: true));
    }

    [Fact]
    public void Only_shapes_and_text_pass()
    {
        const string hostile = "<svg xmlns='http://www.w3.org/2000/svg' onload='a()'><script>a()</script><style>*{}</style>"
            + "<a href='javascript:a()'><path d='M 0,0'/></a><foreignObject/><path d='M 1,1' onclick='a()' style='fill:url(#x)'/></svg>";
        string clean = Toolkit.Drawing.Clean(hostile, 10, 20);

        Assert.Equal("<svg width=\"10\" height=\"20\" xmlns=\"http://www.w3.org/2000/svg\"><path d=\"M 1,1\" /></svg>", clean);
    }

    [Fact]
    public void What_cannot_be_read_is_not_drawn() =>
        Assert.Throws<ArgumentException>(() => fixture.Reader.DrawSvg("C1CC", 100, 100, numbered: true));

    [Fact]
    public void Numbers_in_the_request_do_not_follow_the_culture_of_the_machine()
    {
        CultureInfo.CurrentCulture = new CultureInfo("de-DE");
        Assert.Contains("0.6", Toolkit.Drawing.Details(300, 200), StringComparison.Ordinal);
    }
}
