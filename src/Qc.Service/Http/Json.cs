using System.Globalization;
using System.Text.Json;
using System.Text.Json.Serialization;

namespace Qc.Service.Http;

/// <summary>How the API and the stored reports write JSON: camelCase, enums as camelCase words, times in UTC.</summary>
public static class Json
{
    /// <summary>Options for what the service writes.</summary>
    public static JsonSerializerOptions Options { get; } = Create(JsonUnmappedMemberHandling.Skip);

    /// <summary>Options for what the service is sent: a member it does not know, or a null that is not allowed, is an error.</summary>
    public static JsonSerializerOptions Strict { get; } = Create(JsonUnmappedMemberHandling.Disallow);

    /// <summary>Sets what differs from the defaults of the web.</summary>
    public static void Configure(JsonSerializerOptions options)
    {
        options.NumberHandling = JsonNumberHandling.Strict;
        options.MaxDepth = 32;
        options.Converters.Add(new JsonStringEnumConverter(JsonNamingPolicy.CamelCase, allowIntegerValues: false));
        options.Converters.Add(new UtcTimeConverter());
    }

    private static JsonSerializerOptions Create(JsonUnmappedMemberHandling unmapped)
    {
        var options = new JsonSerializerOptions(JsonSerializerDefaults.Web)
        {
            UnmappedMemberHandling = unmapped,
            RespectNullableAnnotations = unmapped == JsonUnmappedMemberHandling.Disallow,
        };
        Configure(options);
        return options;
    }
}

/// <summary>Times are read with any offset, and kept and written in UTC.</summary>
internal sealed class UtcTimeConverter : JsonConverter<DateTimeOffset>
{
    public override DateTimeOffset Read(ref Utf8JsonReader reader, Type typeToConvert, JsonSerializerOptions options) =>
        reader.GetDateTimeOffset().ToUniversalTime();

    public override void Write(Utf8JsonWriter writer, DateTimeOffset value, JsonSerializerOptions options) =>
        writer.WriteStringValue(value.UtcDateTime.ToString("yyyy-MM-ddTHH:mm:ss.FFFFFF'Z'", CultureInfo.InvariantCulture));
}
