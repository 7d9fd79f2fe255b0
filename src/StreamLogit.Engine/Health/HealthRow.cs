using StreamLogit.Engine.Health.RollUps;

namespace StreamLogit.Engine.Health;

/// <summary>How the numbers and the tally of a bucket of the whole stream are laid out.</summary>
/// <param name="settings">How many settings the bank has.</param>
internal sealed class HealthRow(int settings)
{
    /// <summary>The first cell of the label delays; before them come the bins of log-odds.</summary>
    public const int FirstDelayCell = LogOddsBins.Count;

    /// <summary>The first cell of the rejects by reason.</summary>
    public const int FirstRejectCell = FirstDelayCell + DelayBins.Count;

    /// <summary>Cells of a tally.</summary>
    public const int Cells = FirstRejectCell + 64;

    private const int PerSetting = 4;

    /// <summary>Numbers of a bucket: sums of labels, sums of the stream, and of the bank.</summary>
    public int Numbers { get; } = PlaceOf(settings);

    public int Settings => settings;

    public static ref LabelSums Labels(Span<double> numbers) => ref LabelSums.Of(numbers);

    public static ref StreamSums Stream(Span<double> numbers) => ref StreamSums.Of(numbers[LabelSums.Numbers..]);

    /// <summary>How many minutes it is about, those in which nothing happened mostly left out.</summary>
    public static ref double Minutes(Span<double> numbers) => ref numbers[LabelSums.Numbers + StreamSums.Numbers];

    /// <summary>Of a setting: the sums over labels of log-loss, Brier score and weight, and over minutes of its weight in the blend.</summary>
    public static Span<double> Setting(Span<double> numbers, int setting) => numbers.Slice(PlaceOf(setting), PerSetting);

    /// <summary>A roll-up of such buckets.</summary>
    public RollUp CreateRollUp(string part, ReadOnlySpan<RollUpRetention> levels) =>
        new(part, Numbers, Cells, LogOddsBins.CellWidth, cellsPerTallyAtFirst: 64, levels);

    /// <summary>Where the numbers of a bank of other settings stand now.</summary>
    /// <param name="saved">The settings that it had.</param>
    /// <param name="present">The settings that there are.</param>
    /// <returns>For each of its numbers the place now, or -1 where the setting is gone.</returns>
    public static int[] PlacesOf(ReadOnlySpan<string> saved, ReadOnlySpan<string> present)
    {
        var places = new int[PlaceOf(saved.Length)];
        for (int i = 0; i < PlaceOf(0); i++) places[i] = i;
        for (int setting = 0; setting < saved.Length; setting++)
        {
            int now = present.IndexOf(saved[setting]);
            for (int i = 0; i < PerSetting; i++) places[PlaceOf(setting) + i] = now < 0 ? -1 : PlaceOf(now) + i;
        }
        return places;
    }

    private static int PlaceOf(int setting) => LabelSums.Numbers + StreamSums.Numbers + 1 + setting * PerSetting;
}
