using System.Net;
using System.Net.Http.Headers;
using System.Net.Http.Json;
using System.Security.Cryptography;
using System.Text.Json;
using System.Text.Json.Nodes;
using Qc.Records.People;
using Qc.Service.Features.People;
using Qc.Service.Hosting;
using Qc.Service.Http;

namespace Qc.Service.Demo;

/// <summary>
/// Loads the demo plant by posting it through the public API, as a LIMS and people would, and writes demo.json. A second
/// start finds the plant and only renews the address. Passwords are kept in a file of their own until all is loaded, so that
/// a start that was broken off goes on where it was. Only the first administrator is made inside, since nobody exists before.
/// </summary>
internal static class DemoLoader
{
    private const string FileName = "demo.json";
    private const string UnfinishedFileName = "demo.unfinished.json";

    /// <summary>Where the LIMS key stands among the passwords of an unfinished start; no user has such a name.</summary>
    private const string LimsKey = "LIMS key";

    public static async Task LoadAsync(WebApplication app, QcOptions options, CancellationToken cancellation)
    {
        string url = app.Urls.First().Replace("0.0.0.0", "127.0.0.1", StringComparison.Ordinal).Replace("[::]", "127.0.0.1", StringComparison.Ordinal);
        string file = Path.Combine(options.DataFolder, FileName);
        if (File.Exists(file))
        {
            JsonNode known = JsonNode.Parse(await File.ReadAllTextAsync(file, cancellation))!;
            known["url"] = url;
            SecretFile.Write(file, known.ToJsonString(new JsonSerializerOptions { WriteIndented = true }));
            Announce(known, file);
            return;
        }

        string unfinished = Path.Combine(options.DataFolder, UnfinishedFileName);
        bool goesOn = File.Exists(unfinished);
        Dictionary<string, string> passwords = goesOn
            ? JsonSerializer.Deserialize<Dictionary<string, string>>(await File.ReadAllTextAsync(unfinished, cancellation))!
            : DemoPlant.People.ToDictionary(p => p.User, _ => Password());
        SecretFile.Write(unfinished, JsonSerializer.Serialize(passwords));
        await MakeAdministratorAsync(app.Services, passwords, goesOn, cancellation);
        app.Logger.LogInformation("Loading the demo plant: {People} people, {Products} products, {Lots} lots", DemoPlant.People.Count, DemoPlant.Products.Count, DemoPlant.Lots.Count);
        await LoadPeopleAsync(url, passwords, cancellation);
        if (!passwords.TryGetValue(LimsKey, out string? key))
        {
            // The lots are posted with one key only: what a broken-off start posted is then known as posted.
            key = await MakeKeyAsync(url, passwords, cancellation);
            passwords[LimsKey] = key;
            SecretFile.Write(unfinished, JsonSerializer.Serialize(passwords));
        }

        await LoadProductsAsync(url, passwords, cancellation);
        await LoadLotsAsync(url, passwords, key, app.Logger, cancellation);
        var demo = new JsonObject
        {
            ["url"] = url,
            ["people"] = new JsonArray(
            [
                .. DemoPlant.People.Select(p => (JsonNode)new JsonObject
                {
                    ["user"] = p.User,
                    ["printedName"] = p.PrintedName,
                    ["password"] = passwords[p.User],
                    ["roles"] = new JsonArray([.. p.Roles.Select(r => (JsonNode)r)]),
                }),
            ]),
            ["limsKey"] = key,
        };
        SecretFile.Write(file, demo.ToJsonString(new JsonSerializerOptions { WriteIndented = true }));
        File.Delete(unfinished);
        Announce(demo, file);
    }

    /// <summary>To the console only: a password has no place in a log.</summary>
    private static void Announce(JsonNode demo, string file)
    {
        JsonNode reviewer = demo["people"]!.AsArray().First(p => p!["roles"]!.AsArray().Any(r => (string?)r == Roles.Reviewer))!;
        Console.WriteLine();
        Console.WriteLine($"  The demo plant is ready. Open {(string?)demo["url"]}");
        Console.WriteLine($"  Sign in as {(string?)reviewer["user"]} with the password {(string?)reviewer["password"]}");
        Console.WriteLine($"  Everybody else, and the LIMS key: {file}");
        Console.WriteLine();
    }

    private static string Password() => Convert.ToHexStringLower(RandomNumberGenerator.GetBytes(10));

    private static async Task MakeAdministratorAsync(IServiceProvider services, Dictionary<string, string> passwords, bool goesOn, CancellationToken cancellation)
    {
        await using AsyncServiceScope scope = services.CreateAsyncScope();
        ManagePeople people = scope.ServiceProvider.GetRequiredService<ManagePeople>();
        DemoPerson administrator = DemoPlant.People.First(p => p.Roles.Contains(Roles.Administrator));
        Outcome<Person> made = await people.AddAsync(
            new PersonRequest
            {
                User = administrator.User, PrintedName = administrator.PrintedName, Password = passwords[administrator.User], Roles = administrator.Roles,
            },
            "service",
            cancellation);
        bool wasMadeBefore = goesOn && made.Problem?.Status == StatusCodes.Status409Conflict;
        if (made.Problem is { } problem && !wasMadeBefore)
        {
            throw new InvalidOperationException(
                $"The demo cannot be loaded into this data folder ({problem.Detail}); use an empty folder, or start without --demo.");
        }
    }

    private static async Task LoadPeopleAsync(string url, Dictionary<string, string> passwords, CancellationToken cancellation)
    {
        DemoPerson administrator = DemoPlant.People.First(p => p.Roles.Contains(Roles.Administrator));
        using HttpClient client = await SignInAsync(url, administrator.User, passwords, cancellation);
        foreach (DemoPerson person in DemoPlant.People.Where(p => p != administrator))
        {
            await PostOnceAsync(
                client, "people", new { user = person.User, printedName = person.PrintedName, password = passwords[person.User], roles = person.Roles }, cancellation);
        }
    }

    private static async Task<string> MakeKeyAsync(string url, Dictionary<string, string> passwords, CancellationToken cancellation)
    {
        using HttpClient client = await SignInAsync(url, Holder(Roles.Administrator), passwords, cancellation);
        JsonNode key = await PostAsync(client, "keys", new { name = "LIMS", scopes = new[] { "lots:write", "lots:read", "products:read" } }, cancellation);
        return (string)key["key"]!;
    }

    private static async Task LoadProductsAsync(string url, Dictionary<string, string> passwords, CancellationToken cancellation)
    {
        using HttpClient owner = await SignInAsync(url, Holder(Roles.MethodOwner), passwords, cancellation);
        using HttpClient quality = await SignInAsync(url, Holder(Roles.QualityUnit), passwords, cancellation);
        foreach (DemoProduct product in DemoPlant.Products)
        {
            await PostOnceAsync(
                owner,
                "products",
                new { code = product.Code, name = product.Name, structure = new { smiles = product.Smiles }, solvent = product.Solvent, nucleus = "1H" },
                cancellation);
            JsonArray versions = JsonNode.Parse(await owner.GetStringAsync($"products/{product.Code}/specifications", cancellation))!.AsArray();
            if (versions.Any(v => (string?)v!["state"] == "approved"))
            {
                continue;
            }

            // A draft without approval was left by a start that was broken off.
            if (versions.Count == 0)
            {
                await PostAsync(owner, $"products/{product.Code}/specifications", product.Specification, cancellation);
            }

            await PostAsync(
                quality, $"products/{product.Code}/specifications/1/approve", new { password = passwords[Holder(Roles.QualityUnit)] }, cancellation);
        }
    }

    private static async Task LoadLotsAsync(string url, Dictionary<string, string> passwords, string key, ILogger logger, CancellationToken cancellation)
    {
        using var lims = Client(url);
        lims.DefaultRequestHeaders.Authorization = new AuthenticationHeaderValue("Bearer", key);
        lims.DefaultRequestHeaders.Add("Prefer", "wait=60");
        using HttpClient reviewer = await SignInAsync(url, Holder(Roles.Reviewer), passwords, cancellation);
        foreach (DemoLot lot in DemoPlant.Lots)
        {
            // The key of the repeat makes a start that goes on find the lots it had posted.
            lims.DefaultRequestHeaders.Remove("Idempotency-Key");
            lims.DefaultRequestHeaders.Add("Idempotency-Key", $"demo {lot.Product} {lot.Lot}");
            JsonNode answer = await PostAsync(
                lims,
                "lots",
                new
                {
                    product = lot.Product,
                    lot = lot.Lot,
                    sample = lot.Sample,
                    instrument = lot.Measurement.FrequencyMHz < 100 ? "bench-2" : "high-field-1",
                    spectra = new[] { new { name = "proton", format = "jcamp-dx", content = DemoPlant.File(lot), encoding = "text" } },
                },
                cancellation);
            logger.LogInformation("Lot {Lot} of {Product}: {State} {Verdict}", lot.Lot, lot.Product, (string?)answer["state"], (string?)answer["verdict"]);
            if (lot.Decision is { } decision)
            {
                string reason = decision == "release" ? "All findings pass; the spectrum is that of the product." : "The spectrum is that of another ester.";
                await PostOnceAsync(
                    reviewer, $"lots/{answer["id"]}/reviews", new { decision, reason, password = passwords[Holder(Roles.Reviewer)] }, cancellation);
            }
        }
    }

    private static string Holder(string role) => DemoPlant.People.First(p => p.Roles.Contains(role)).User;

    private static HttpClient Client(string url) => new(new SocketsHttpHandler { CookieContainer = new CookieContainer(), UseProxy = false })
    {
        BaseAddress = new Uri($"{url}/api/v1/"),
        Timeout = TimeSpan.FromMinutes(3),
    };

    private static async Task<HttpClient> SignInAsync(string url, string user, Dictionary<string, string> passwords, CancellationToken cancellation)
    {
        HttpClient client = Client(url);
        await PostAsync(client, "session", new { user, password = passwords[user] }, cancellation);
        return client;
    }

    /// <summary>Posts what an earlier start may have posted already.</summary>
    private static async Task PostOnceAsync(HttpClient client, string path, object body, CancellationToken cancellation)
    {
        using HttpResponseMessage response = await client.PostAsJsonAsync(path, body, Json.Options, cancellation);
        if (!response.IsSuccessStatusCode && response.StatusCode != HttpStatusCode.Conflict)
        {
            throw new InvalidOperationException(
                $"The demo could not be loaded: POST {path} answered {(int)response.StatusCode}: {await response.Content.ReadAsStringAsync(cancellation)}");
        }
    }

    private static async Task<JsonNode> PostAsync(HttpClient client, string path, object body, CancellationToken cancellation)
    {
        using HttpResponseMessage response = await client.PostAsJsonAsync(path, body, Json.Options, cancellation);
        string text = await response.Content.ReadAsStringAsync(cancellation);
        return response.IsSuccessStatusCode
            ? JsonNode.Parse(text)!
            : throw new InvalidOperationException($"The demo could not be loaded: POST {path} answered {(int)response.StatusCode}: {text}");
    }
}
