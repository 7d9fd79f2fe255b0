using System.Collections.Immutable;
using System.Runtime.InteropServices;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Learning;

/// <summary>
/// Saves a bank and loads it: <c>learning/bank</c> says how its rows lie, <c>learning/settings</c> has a block for every setting,
/// <c>learning/coefficients</c> a block for every run of slots. Numbers are little-endian doubles.
/// </summary>
internal sealed class BankState(ImmutableArray<string> names, SlotBlocks blocks, ImmutableArray<LearnerGroup> groups, Blend blend)
{
    private const string BankPart = "learning/bank";
    private const string SettingsPart = "learning/settings";
    private const string CoefficientsPart = "learning/coefficients";
    private const int FormatVersion = 1;

    private readonly int _doublesPerSlot = groups.Sum(group => group.Learner.DoublesPerSlot);
    private bool _isChanged = true;
    private bool _isLayoutSaved;

    /// <summary>Notes that something was learned.</summary>
    public void MarkChanged() => _isChanged = true;

    public void Save(StateBlocks changes)
    {
        if (!_isChanged) return;
        if (!_isLayoutSaved) changes.Put(BankPart, 0, Layout());
        SaveSettings(changes);
        double[] numbers = new double[_doublesPerSlot * blocks.SlotsPerBlock];
        for (int block = 0; block < blocks.Count; block++)
        {
            if (!blocks.IsChanged(block)) continue;
            Span<double> rest = numbers;
            foreach (LearnerGroup group in groups)
            {
                Span<double> rows = group.Learner.Rows(block * blocks.SlotsPerBlock, blocks.SlotsPerBlock);
                rows.CopyTo(rest);
                rest = rest[rows.Length..];
            }
            changes.Put(CoefficientsPart, block, MemoryMarshal.AsBytes<double>(numbers));
            blocks.MarkSaved(block);
        }
        _isChanged = false;
        _isLayoutSaved = true;
    }

    public void Load(StateBlocks state)
    {
        byte[] layout = state.Find(BankPart, 0) ?? throw new InvalidStateException("The state has no bank.");
        if (!layout.AsSpan().SequenceEqual(Layout())) throw new InvalidStateException("The state belongs to another bank of settings.");
        LoadSettings(state);
        foreach ((long block, byte[] bytes) in state.Read(CoefficientsPart))
        {
            if (block < 0 || block >= blocks.Count || bytes.Length != _doublesPerSlot * blocks.SlotsPerBlock * sizeof(double))
                throw new InvalidStateException("A block of coefficients is damaged.");
            ReadOnlySpan<double> rest = MemoryMarshal.Cast<byte, double>(bytes);
            foreach (LearnerGroup group in groups)
            {
                Span<double> rows = group.Learner.Rows((int)block * blocks.SlotsPerBlock, blocks.SlotsPerBlock);
                rest[..rows.Length].CopyTo(rows);
                rest = rest[rows.Length..];
            }
            blocks.MarkSaved((int)block);
        }
        _isChanged = false;
        _isLayoutSaved = true;
    }

    private void SaveSettings(StateBlocks changes)
    {
        foreach (LearnerGroup group in groups)
        {
            double[] numbers = new double[Blend.DoublesPerSetting + group.Learner.DoublesPerSetting];
            for (int lane = 0; lane < group.Settings.Length; lane++)
            {
                blend.SaveSetting(group.Settings[lane], numbers);
                group.Learner.SaveSetting(lane, numbers.AsSpan(Blend.DoublesPerSetting));
                changes.Put(SettingsPart, group.Settings[lane], MemoryMarshal.AsBytes<double>(numbers));
            }
        }
    }

    private void LoadSettings(StateBlocks state)
    {
        foreach (LearnerGroup group in groups)
        {
            for (int lane = 0; lane < group.Settings.Length; lane++)
            {
                ReadOnlySpan<double> numbers = MemoryMarshal.Cast<byte, double>(state.Find(SettingsPart, group.Settings[lane]));
                if (numbers.Length != Blend.DoublesPerSetting + group.Learner.DoublesPerSetting)
                    throw new InvalidStateException($"The numbers of setting '{names[group.Settings[lane]]}' are damaged.");
                blend.LoadSetting(group.Settings[lane], numbers);
                group.Learner.LoadSetting(lane, numbers[Blend.DoublesPerSetting..]);
            }
        }
    }

    private byte[] Layout()
    {
        using var stream = new MemoryStream();
        using (var writer = new BinaryWriter(stream))
        {
            writer.Write(FormatVersion);
            writer.Write(blocks.SlotCount);
            writer.Write(blocks.SlotsPerBlock);
            writer.Write(names.Length);
            foreach (string name in names) writer.Write(name);
        }
        return stream.ToArray();
    }
}
