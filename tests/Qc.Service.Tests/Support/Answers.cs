using System.Net;
using System.Text.Json.Nodes;
using Xunit;

namespace Qc.Service.Tests.Support;

/// <summary>Reads answers, and says what came instead where they are not as expected.</summary>
internal static class Answers
{
    public static async Task<JsonNode> JsonAsync(this HttpResponseMessage answer, HttpStatusCode expected = HttpStatusCode.OK)
    {
        string text = await answer.Content.ReadAsStringAsync();
        Assert.True(answer.StatusCode == expected, $"{(int)expected} was expected, not {(int)answer.StatusCode}: {text}");
        return JsonNode.Parse(text)!;
    }

    /// <summary>The answer is problem+json of a type, and points at a field where one is named.</summary>
    public static async Task<JsonNode> ProblemAsync(this HttpResponseMessage answer, int status, string type, string? pointer = null)
    {
        string text = await answer.Content.ReadAsStringAsync();
        Assert.True((int)answer.StatusCode == status, $"{status} was expected, not {(int)answer.StatusCode}: {text}");
        Assert.Equal("application/problem+json", answer.Content.Headers.ContentType?.MediaType);
        JsonNode problem = JsonNode.Parse(text)!;
        Assert.Equal($"/problems/{type}", (string?)problem["type"]);
        Assert.Equal(status, (int)problem["status"]!);
        Assert.False(string.IsNullOrWhiteSpace((string?)problem["title"]));
        Assert.False(string.IsNullOrWhiteSpace((string?)problem["detail"]));
        if (pointer is not null)
        {
            Assert.Contains(pointer, problem["errors"]!.AsArray().Select(e => (string?)e!["pointer"]));
        }

        return problem;
    }
}
