namespace Qc.Engine.Reading;

/// <summary>The byte order mark that some editors put before UTF-8 text.</summary>
internal static class Utf8Mark
{
    public static ReadOnlySpan<byte> Skip(ReadOnlySpan<byte> content) =>
        content.StartsWith((ReadOnlySpan<byte>)[0xEF, 0xBB, 0xBF]) ? content[3..] : content;
}
