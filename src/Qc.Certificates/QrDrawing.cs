using System.Collections;
using PdfSharp.Drawing;
using QRCoder;

namespace Qc.Certificates;

/// <summary>A QR code (ISO/IEC 18004) with error correction M, drawn as rectangles; four modules of quiet zone around it.</summary>
internal static class QrDrawing
{
    /// <summary>Side in points, quiet zone included.</summary>
    public const double Side = 86;

    /// <summary>Draws a text's code.</summary>
    public static void Draw(XGraphics graphics, string text, double left, double top)
    {
        bool[][] modules = Modules(text);
        double step = Side / modules.Length;
        for (int row = 0; row < modules.Length; row++)
        {
            for (int column = 0; column < modules.Length; column++)
            {
                // A run of dark modules is one rectangle, so that no hairlines show between them.
                int start = column;
                while (column < modules.Length && modules[row][column])
                {
                    column++;
                }

                if (column > start)
                {
                    graphics.DrawRectangle(XBrushes.Black, left + (start * step), top + (row * step), (column - start) * step, step * 1.02);
                }
            }
        }
    }

    /// <summary>Dark modules by row, quiet zone included.</summary>
    internal static bool[][] Modules(string text)
    {
        using QRCodeData code = QRCodeGenerator.GenerateQrCode(text, QRCodeGenerator.ECCLevel.M);
        return [.. code.ModuleMatrix.Select((BitArray row) => row.Cast<bool>().ToArray())];
    }
}
