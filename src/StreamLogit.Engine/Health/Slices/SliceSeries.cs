using StreamLogit.Engine.Health.RollUps;

namespace StreamLogit.Engine.Health.Slices;

/// <summary>The labels of the events that had one value of a sliced field.</summary>
/// <param name="rollUp">Their sums over time.</param>
internal sealed class SliceSeries(RollUp rollUp)
{
    private HistoryCache? _history;

    public RollUp RollUp => rollUp;

    /// <summary>The hash of the value.</summary>
    public ulong Hash { get; set; }

    /// <summary>The text of the value; null where these are the labels of all other values.</summary>
    public string? Text { get; set; }

    /// <summary>How many events had the value, halved every day.</summary>
    public long RecentEvents { get; set; }

    /// <summary>How often its place was given to another value.</summary>
    public int Generation { get; set; }

    /// <summary>How the figures went over time.</summary>
    public HealthHistory History() => (_history ??= new HistoryCache(rollUp, settingNames: null)).History();

    public void Save(BinaryWriter writer)
    {
        writer.Write(Hash);
        writer.Write(Text ?? "");
        writer.Write(RecentEvents);
        writer.Write(Generation);
    }

    public void Load(BinaryReader reader)
    {
        Hash = reader.ReadUInt64();
        Text = reader.ReadString();
        RecentEvents = reader.ReadInt64();
        Generation = reader.ReadInt32();
    }
}
