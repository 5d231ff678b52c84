using System.Buffers.Binary;
using System.IO.Compression;
using static System.FormattableString;

namespace Qc.Engine.Reading.NmrMl;

/// <summary>Unfolds base64, optional zlib, and little-endian numbers, real or in (real, imaginary) pairs.</summary>
internal static class NmrMlNumbers
{
    public static bool TryUnfold(NmrMlArray array, ReadingLog log, out double[] real, out double[]? imaginary)
    {
        real = [];
        imaginary = null;
        if (FormatOf(array.ByteFormat) is not { } format)
        {
            return Fail(array, log, "complex128, complex64, float64, float32 or integer32", "The byte format is not read");
        }

        if (!TryBytes(array, log, log.Limits.MaxPoints * 8L, out var bytes))
        {
            return false;
        }

        var (size, isInteger, isComplex) = format;
        var count = bytes.Length / size;
        if (bytes.Length % (isComplex ? 2 * size : size) != 0 || count == 0)
        {
            return Fail(array, log, $"a whole number of values as {array.ByteFormat}", Invariant($"The array has {bytes.Length} bytes"));
        }

        if (count > log.Limits.MaxPoints)
        {
            return Fail(array, log, Invariant($"at most {log.Limits.MaxPoints} values"), Invariant($"The array has {count} values"));
        }

        var values = new double[count];
        for (var i = 0; i < count; i++)
        {
            values[i] = ValueOf(bytes.AsSpan(i * size, size), isInteger);
            if (!double.IsFinite(values[i]))
            {
                return Fail(array, log, "finite values", Invariant($"Value {i + 1} is not a finite number"));
            }
        }

        real = isComplex ? Every2nd(values, 0) : values;
        imaginary = isComplex ? Every2nd(values, 1) : null;
        return true;
    }

    private static (int Size, bool IsInteger, bool IsComplex)? FormatOf(string name) => name.ToUpperInvariant() switch
    {
        "COMPLEX128" => (8, false, true),
        "COMPLEX64" => (4, false, true),
        "FLOAT64" => (8, false, false),
        "FLOAT32" => (4, false, false),
        "INTEGER32" or "INT32" => (4, true, false),
        _ => null,
    };

    private static double ValueOf(ReadOnlySpan<byte> bytes, bool isInteger) =>
        isInteger ? BinaryPrimitives.ReadInt32LittleEndian(bytes)
        : bytes.Length == 4 ? BinaryPrimitives.ReadSingleLittleEndian(bytes)
        : BinaryPrimitives.ReadDoubleLittleEndian(bytes);

    private static double[] Every2nd(double[] values, int start)
    {
        var part = new double[values.Length / 2];
        for (var i = 0; i < part.Length; i++)
        {
            part[i] = values[(2 * i) + start];
        }

        return part;
    }

    private static bool TryBytes(NmrMlArray array, ReadingLog log, long most, out byte[] bytes)
    {
        bytes = [];
        var packed = new byte[(array.Text.Length / 4 * 3) + 3];
        if (!Convert.TryFromBase64String(array.Text, packed, out var length))
        {
            return Fail(array, log, "base64", "The text of the array cannot be decoded");
        }

        if (array.Compressed is not ("true" or "1" or "zlib"))
        {
            bytes = packed[..length];
            return true;
        }

        try
        {
            using var zlib = new ZLibStream(new MemoryStream(packed, 0, length), CompressionMode.Decompress);
            using var unpacked = new MemoryStream();
            var part = new byte[64 * 1024];
            for (int read; (read = zlib.Read(part)) > 0;)
            {
                if (unpacked.Length + read > most)
                {
                    return Fail(array, log, Invariant($"at most {most} bytes"), "The array unpacks to too much");
                }

                unpacked.Write(part, 0, read);
            }

            bytes = unpacked.ToArray();
            return true;
        }
        catch (InvalidDataException)
        {
            return Fail(array, log, "zlib data", "The array cannot be unpacked");
        }
    }

    private static bool Fail(NmrMlArray array, ReadingLog log, string expected, string problem) =>
        log.Fail(array.Element, array.Line, expected, problem);
}
