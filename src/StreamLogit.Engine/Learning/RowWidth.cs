using System.Runtime.Intrinsics;

namespace StreamLogit.Engine.Learning;

/// <summary>How many places a row of settings takes, and how many of them one instruction works on.</summary>
internal static class RowWidth
{
    /// <summary>The widest lanes there are.</summary>
    public const int Widest = 8;

    /// <summary>The settings rounded up to 1, 2, 4 or a multiple of 8, so that whole registers cover the row.</summary>
    public static int Padded(int settings) => settings switch
    {
        <= 2 => settings,
        <= 4 => 4,
        _ => (settings + 7) / 8 * 8,
    };

    /// <summary>The widest lanes that divide the row, are fast on this machine and are not wider than asked for. The choice changes no bit.</summary>
    public static int Lanes(int rowLength, int widest)
    {
        if (rowLength % 8 == 0 && widest >= 8 && Vector512.IsHardwareAccelerated) return 8;
        if (rowLength % 4 == 0 && widest >= 4 && Vector256.IsHardwareAccelerated) return 4;
        if (rowLength % 2 == 0 && widest >= 2 && Vector128.IsHardwareAccelerated) return 2;
        return 1;
    }
}
