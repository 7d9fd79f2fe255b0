using System.Globalization;

namespace StreamLogit.Worker.Output;

/// <summary>Figures as people read them; "-" where there is none.</summary>
internal static class FigureText
{
    private const string None = "-";

    /// <summary>A whole number.</summary>
    public static string Count(long count) => count.ToString(CultureInfo.InvariantCulture);

    /// <summary>A mean loss, a probability or a rate, with five decimals.</summary>
    public static string Mean(double value) => double.IsNaN(value) ? None : value.ToString("F5", CultureInfo.InvariantCulture);

    /// <summary>A coefficient, with five significant digits.</summary>
    public static string Coefficient(double value) => value.ToString("G5", CultureInfo.InvariantCulture);

    /// <summary>Bytes in the unit that suits.</summary>
    public static string Bytes(double bytes)
    {
        string[] units = ["bytes", "KiB", "MiB", "GiB", "TiB"];
        int unit = 0;
        while (bytes >= 1024 && unit < units.Length - 1)
        {
            bytes /= 1024;
            unit++;
        }
        return bytes.ToString(unit == 0 ? "F0" : "F1", CultureInfo.InvariantCulture) + " " + units[unit];
    }
}
