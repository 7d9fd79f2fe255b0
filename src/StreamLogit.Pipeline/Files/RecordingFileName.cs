using System.Globalization;

namespace StreamLogit.Pipeline.Files;

/// <summary>The name of a file of a recording. The order of the names is the order in which the files were written.</summary>
/// <param name="Start">Bytes of all files before it.</param>
/// <param name="Day">The day of the stream's time, counted from 1970-01-01, or <see cref="Undated"/>.</param>
internal sealed record RecordingFileName(long Start, long Day)
{
    /// <summary>The day of a file that begins with records without a time.</summary>
    public const long Undated = -1;

    private const int StartDigits = 16;
    private const string UndatedText = "undated";
    private const string DayForm = "yyyy-MM-dd";
    private const string Ending = ".jsonl.zst";

    /// <summary>Reads the name of a file, or gives null where it is another one.</summary>
    public static RecordingFileName? Parse(string path)
    {
        string name = Path.GetFileName(path);
        if (name.Length < StartDigits + 1 + Ending.Length || name[StartDigits] != '-' || !name.EndsWith(Ending, StringComparison.Ordinal)) return null;
        if (!long.TryParse(name.AsSpan(0, StartDigits), NumberStyles.None, CultureInfo.InvariantCulture, out long start)) return null;
        string day = name[(StartDigits + 1)..^Ending.Length];
        if (day == UndatedText) return new RecordingFileName(start, Undated);
        return DateOnly.TryParseExact(day, DayForm, CultureInfo.InvariantCulture, DateTimeStyles.None, out var date)
            ? new RecordingFileName(start, date.DayNumber - DateOnly.FromDateTime(DateTime.UnixEpoch).DayNumber)
            : null;
    }

    /// <inheritdoc/>
    public override string ToString()
    {
        string day = Day == Undated ? UndatedText : DateOnly.FromDateTime(DateTime.UnixEpoch.AddDays(Day)).ToString(DayForm, CultureInfo.InvariantCulture);
        return string.Create(CultureInfo.InvariantCulture, $"{Start:D16}-{day}{Ending}");
    }
}
