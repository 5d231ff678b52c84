using System.Text.Json;
using System.Text.Json.Serialization;

namespace Qc.Service.Http;

/// <summary>How the API and the stored reports write JSON: camelCase, enums as camelCase words.</summary>
public static class Json
{
    /// <summary>Options for what the service writes.</summary>
    public static JsonSerializerOptions Options { get; } = Create(JsonUnmappedMemberHandling.Skip);

    /// <summary>Options for what the service is sent: a member it does not know is an error, never ignored.</summary>
    public static JsonSerializerOptions Strict { get; } = Create(JsonUnmappedMemberHandling.Disallow);

    private static JsonSerializerOptions Create(JsonUnmappedMemberHandling unmapped) => new(JsonSerializerDefaults.Web)
    {
        UnmappedMemberHandling = unmapped,
        NumberHandling = JsonNumberHandling.Strict,
        MaxDepth = 32,
        Converters = { new JsonStringEnumConverter(JsonNamingPolicy.CamelCase, allowIntegerValues: false) },
    };
}
