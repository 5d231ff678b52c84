using System.Text.Json;
using System.Text.Json.Nodes;
using Microsoft.Playwright;
using Xunit;

namespace Qc.EndToEnd.Tests;

/// <summary>The pages in a real browser, headless Chromium, on the demo plant.</summary>
[Collection(DemoFixture.Name)]
public sealed class PageTests(DemoFixture demo) : IAsyncLifetime
{
    private IPlaywright _playwright = null!;
    private IBrowser _browser = null!;

    public async Task InitializeAsync()
    {
        _playwright = await Playwright.CreateAsync();
        _browser = await _playwright.Chromium.LaunchAsync(new BrowserTypeLaunchOptions
        {
            ExecutablePath = Environment.GetEnvironmentVariable("QC_CHROMIUM") ?? "/usr/bin/chromium",
            Args = ["--no-sandbox", "--disable-gpu", "--disable-background-networking", "--disable-component-update", "--disable-sync", "--no-first-run"],
        });
    }

    public async Task DisposeAsync()
    {
        await _browser.DisposeAsync();
        _playwright.Dispose();
    }

    [Fact]
    public async Task A_reviewer_follows_a_finding_into_the_spectrum_and_signs_a_rejection()
    {
        JsonNode lot = await demo.LotAsync("C-3020", "26-0370");
        (IPage page, string password) = await SignedInAsync();
        await page.ClickAsync($"a[href='/lots/{lot["id"]}']");
        await page.WaitForURLAsync($"**/lots/{lot["id"]}");
        await page.Locator("#plot-status", new PageLocatorOptions { HasText = "Shown:" }).WaitForAsync();

        ILocator finding = page.Locator("ul.findings button.place").First;
        await finding.ClickAsync();
        Assert.Equal("true", await finding.GetAttributeAsync("aria-pressed"));
        await page.Locator("#plot-status", new PageLocatorOptions { HasText = "Marked:" }).WaitForAsync();

        await page.CheckAsync("input[name=decision][value=reject]");
        await page.FillAsync("#reason", "The spectrum is that of the other isomer.");
        await page.FillAsync("#password", "not the password");
        await page.ClickAsync("form[data-form=review] button[type=submit]");
        ILocator errors = page.Locator("form[data-form=review] [data-errors]");
        await errors.WaitForAsync();
        Assert.Contains("password", await errors.InnerTextAsync(), StringComparison.OrdinalIgnoreCase);
        Assert.Equal("checked", (string?)(await demo.LotAsync("C-3020", "26-0370"))["state"]);

        await page.FillAsync("#password", password);
        await page.ClickAsync("form[data-form=review] button[type=submit]");
        await page.Locator(".signature").WaitForAsync();
        Assert.Contains("The spectrum is that of the other isomer.", await page.InnerTextAsync(".signature"), StringComparison.Ordinal);
        Assert.Equal("rejected", (string?)(await demo.LotAsync("C-3020", "26-0370"))["state"]);
        await page.GotoAsync($"{demo.Service.Url}/waiting");
        Assert.Equal(0, await page.Locator($"a[href='/lots/{lot["id"]}']").CountAsync());
    }

    [Fact]
    public async Task The_spectrum_is_moved_and_scaled_by_the_keyboard()
    {
        JsonNode lot = await demo.LotAsync("A-1077", "26-0430");
        (IPage page, _) = await SignedInAsync();
        await page.GotoAsync($"{demo.Service.Url}/lots/{lot["id"]}");
        ILocator status = page.Locator("#plot-status", new PageLocatorOptions { HasText = "Shown:" });
        await status.WaitForAsync();
        string whole = await status.InnerTextAsync();
        await page.FocusAsync("[data-stage]");
        await page.Keyboard.PressAsync("+");
        string closer = await status.InnerTextAsync();
        await page.Keyboard.PressAsync("ArrowLeft");
        string moved = await status.InnerTextAsync();
        await page.Keyboard.PressAsync("ArrowUp");
        string taller = await status.InnerTextAsync();
        await page.Keyboard.PressAsync("0");
        Assert.Equal(4, new[] { whole, closer, moved, taller }.Distinct().Count());
        Assert.Contains("height × 2", taller, StringComparison.Ordinal);
        Assert.Equal(whole, await status.InnerTextAsync());
    }

    [Fact]
    public async Task On_paper_the_findings_stay_and_the_controls_go()
    {
        JsonNode lot = await demo.LotAsync("A-1077", "26-0430");
        (IPage page, _) = await SignedInAsync();
        await page.GotoAsync($"{demo.Service.Url}/lots/{lot["id"]}");
        await page.EmulateMediaAsync(new PageEmulateMediaOptions { Media = Media.Print });
        Assert.False(await page.IsVisibleAsync(".tools"));
        Assert.False(await page.IsVisibleAsync("form[data-form=review]"));
        Assert.True(await page.IsVisibleAsync("ul.findings"));
        Assert.True(await page.IsVisibleAsync("[data-plot-figure] canvas"));
    }

    [Theory]
    [InlineData(1440, ColorScheme.Light)]
    [InlineData(390, ColorScheme.Dark)]
    public async Task No_page_breaks_the_rules_of_WCAG_that_a_machine_can_check_or_scrolls_sideways(int width, ColorScheme scheme)
    {
        JsonNode lot = await demo.LotAsync("A-1077", "26-0430");
        (IPage page, _) = await SignedInAsync();
        await page.EmulateMediaAsync(new PageEmulateMediaOptions { ColorScheme = scheme });
        await page.SetViewportSizeAsync(width, 900);
        string axe = await File.ReadAllTextAsync(Path.Combine(Repository.Root, "node_modules", "axe-core", "axe.min.js"));
        foreach (string path in new[] { "/waiting", "/lots", $"/lots/{lot["id"]}", "/products", "/products/A-1042" })
        {
            await page.GotoAsync($"{demo.Service.Url}{path}");
            await page.EvaluateAsync(axe);
            JsonElement violations = await page.EvaluateAsync<JsonElement>(
                "async () => (await axe.run(document, { runOnly: ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa'] })).violations"
                + ".map(v => v.id + ': ' + v.nodes.map(n => n.target.join(' ')).join(', '))");
            Assert.True(violations.GetArrayLength() == 0, $"{path}: {violations}");
            Assert.True(await page.EvaluateAsync<bool>("() => document.documentElement.scrollWidth <= innerWidth"), $"{path} scrolls sideways at {width} px");
        }
    }

    /// <summary>A page on which the first reviewer of the demo is signed in, at the list of what waits, and the reviewer's password.</summary>
    private async Task<(IPage Page, string Password)> SignedInAsync()
    {
        JsonNode reviewer = demo.Service.Demo["people"]!.AsArray().First(p => p!["roles"]!.AsArray().Any(r => (string?)r == "reviewer"))!;
        string password = (string)reviewer["password"]!;
        // The pages forbid scripts from elsewhere; the checker of the rules is put in from outside.
        IBrowserContext context = await _browser.NewContextAsync(new BrowserNewContextOptions { BypassCSP = true });
        IPage page = await context.NewPageAsync();
        await page.GotoAsync($"{demo.Service.Url}/sign-in");
        await page.FillAsync("input[name=user]", (string)reviewer["user"]!);
        await page.FillAsync("input[name=password]", password);
        await page.Keyboard.PressAsync("Enter");
        await page.WaitForURLAsync("**/waiting**");
        return (page, password);
    }
}
