using System.Collections.Immutable;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Learning;

/// <summary>How the rows and numbers of a bank lie in a saved state.</summary>
internal sealed record BankLayout
{
    private const int FormatVersion = 1;

    public required int SlotCount { get; init; }

    public required int FirstDenseSlot { get; init; }

    public required int SlotsPerBlock { get; init; }

    public required bool KeepsLosses { get; init; }

    public required ImmutableArray<GroupLayout> Groups { get; init; }

    public int DoublesPerSlot => Groups.Sum(group => group.RowLength * group.RowsPerSlot);

    public int SettingCount => Groups.Sum(group => group.Settings.Length);

    public byte[] ToBytes()
    {
        using var stream = new MemoryStream();
        using var writer = new BinaryWriter(stream);
        writer.Write(FormatVersion);
        writer.Write(SlotCount);
        writer.Write(FirstDenseSlot);
        writer.Write(SlotsPerBlock);
        writer.Write(KeepsLosses);
        writer.Write(Groups.Length);
        foreach (GroupLayout group in Groups)
        {
            writer.Write(group.Rule);
            writer.Write(group.RowLength);
            writer.Write(group.RowsPerSlot);
            writer.Write(group.NumbersPerSetting);
            writer.Write(group.Settings.Length);
            foreach ((int place, string name) in group.Settings)
            {
                writer.Write(place);
                writer.Write(name);
            }
        }
        writer.Flush();
        return stream.ToArray();
    }

    /// <exception cref="InvalidStateException">The bytes are no layout of this version.</exception>
    public static BankLayout Read(byte[] bytes)
    {
        try
        {
            using var reader = new BinaryReader(new MemoryStream(bytes));
            int version = reader.ReadInt32();
            if (version != FormatVersion) throw new InvalidStateException($"The bank was saved in format {version}; this program reads format {FormatVersion}.");
            var layout = new BankLayout
            {
                SlotCount = reader.ReadInt32(),
                FirstDenseSlot = reader.ReadInt32(),
                SlotsPerBlock = reader.ReadInt32(),
                KeepsLosses = reader.ReadBoolean(),
                Groups = [.. Enumerable.Range(0, reader.ReadInt32()).Select(_ => ReadGroup(reader))],
            };
            return layout.SlotsPerBlock > 0 ? layout : throw new InvalidStateException("The layout of the bank is damaged.");
        }
        catch (Exception damage) when (damage is IOException or ArgumentException)
        {
            throw new InvalidStateException("The layout of the bank is damaged.");
        }
    }

    private static GroupLayout ReadGroup(BinaryReader reader) => new(
        reader.ReadString(), reader.ReadInt32(), reader.ReadInt32(), reader.ReadInt32(),
        [.. Enumerable.Range(0, reader.ReadInt32()).Select(_ => (reader.ReadInt32(), reader.ReadString()))]);
}
