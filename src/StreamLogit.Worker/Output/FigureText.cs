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

    /// <summary>A sum, a ratio or a statistic, with five significant digits.</summary>
    public static string Number(double value) => double.IsNaN(value) ? None : value.ToString("G5", CultureInfo.InvariantCulture);

    /// <summary>A share as a whole percentage.</summary>
    public static string Percent(double share) => share.ToString("0 %", CultureInfo.InvariantCulture);

    /// <summary>A time in the unit that suits.</summary>
    public static string Seconds(double seconds) => seconds switch
    {
        double.NaN => None,
        < 120 => seconds.ToString("G3", CultureInfo.InvariantCulture) + " s",
        < 7_200 => (seconds / 60).ToString("F1", CultureInfo.InvariantCulture) + " min",
        < 172_800 => (seconds / 3_600).ToString("F1", CultureInfo.InvariantCulture) + " h",
        _ => (seconds / 86_400).ToString("F1", CultureInfo.InvariantCulture) + " d",
    };

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
