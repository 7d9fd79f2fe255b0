using System.Collections.Immutable;
using System.Runtime.InteropServices;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Learning;

/// <summary>
/// Saves a bank and loads it: <c>learning/bank</c> says how its rows lie, <c>learning/settings</c> has a block for every setting,
/// <c>learning/coefficients</c> a block for every run of slots. Numbers are little-endian doubles.
/// </summary>
internal sealed class BankState
{
    public const string BankPart = "learning/bank";
    public const string SettingsPart = "learning/settings";
    public const string CoefficientsPart = "learning/coefficients";

    private readonly SlotBlocks _blocks;
    private readonly ImmutableArray<LearnerGroup> _groups;
    private readonly Blend _blend;
    private readonly BankLayout _layout;
    /// <summary>Blocks of an earlier layout that the next save must take away.</summary>
    private ImmutableArray<(string Part, long Number)> _outdated = [];

    public BankState(ImmutableArray<string> names, int firstDenseSlot, SlotBlocks blocks, ImmutableArray<LearnerGroup> groups, Blend blend)
    {
        _blocks = blocks;
        _groups = groups;
        _blend = blend;
        _layout = new BankLayout
        {
            SlotCount = blocks.SlotCount,
            FirstDenseSlot = firstDenseSlot,
            SlotsPerBlock = blocks.SlotsPerBlock,
            KeepsLosses = blend.KeepsLosses,
            Groups = [.. groups.Select(group => new GroupLayout(
                group.Rule, group.Learner.RowLength, group.Learner.RowsPerSlot, group.Learner.NumbersPerSetting,
                [.. group.Settings.Select(place => (place, names[place]))]))],
        };
    }

    /// <summary>Whether the saved state lies as this bank does. If not, the next save replaces all of it.</summary>
    public bool IsLayoutSaved { get; private set; }

    /// <summary>Puts what changed. Only to be called if something did.</summary>
    public void Save(StateBlocks changes)
    {
        foreach ((string part, long number) in _outdated) changes.Remove(part, number);
        _outdated = [];
        if (!IsLayoutSaved) changes.Put(BankPart, 0, _layout.ToBytes());
        IsLayoutSaved = true;
        SaveSettings(changes);
        SaveCoefficients(changes);
    }

    /// <summary>Takes up a state, of this bank or of another one over the same slots.</summary>
    /// <exception cref="InvalidStateException">The state is damaged or is about other slots.</exception>
    public BankChange Load(StateBlocks state)
    {
        byte[] bytes = state.Find(BankPart, 0) ?? throw new InvalidStateException("The state has no bank.");
        var saved = new SavedBank(BankLayout.Read(bytes), state);
        if (saved.Layout.SlotCount != _layout.SlotCount || saved.Layout.FirstDenseSlot != _layout.FirstDenseSlot)
            throw new InvalidStateException("The state has another number of slots.");
        BankChange change = new BankTransfer(_layout, _groups, _blocks, _blend).From(saved);
        IsLayoutSaved = bytes.AsSpan().SequenceEqual(_layout.ToBytes());
        if (IsLayoutSaved) _blocks.MarkAllSaved();
        else _outdated = [.. saved.BlockNumbers.Select(n => (CoefficientsPart, n)), .. Enumerable.Range(0, saved.Layout.SettingCount).Select(n => (SettingsPart, (long)n))];
        return change;
    }

    private void SaveSettings(StateBlocks changes)
    {
        foreach (LearnerGroup group in _groups)
        {
            double[] numbers = new double[Blend.NumbersPerSetting + group.Learner.NumbersPerSetting];
            for (int lane = 0; lane < group.Settings.Length; lane++)
            {
                _blend.SaveSetting(group.Settings[lane], numbers);
                group.Learner.SaveSetting(lane, numbers.AsSpan(Blend.NumbersPerSetting));
                changes.Put(SettingsPart, group.Settings[lane], MemoryMarshal.AsBytes<double>(numbers));
            }
        }
    }

    private void SaveCoefficients(StateBlocks changes)
    {
        double[] numbers = new double[_layout.DoublesPerSlot * _blocks.SlotsPerBlock];
        for (int block = 0; block < _blocks.Count; block++)
        {
            if (!_blocks.IsChanged(block)) continue;
            Span<double> rest = numbers;
            foreach (LearnerGroup group in _groups)
            {
                Span<double> rows = group.Learner.Rows(block * _blocks.SlotsPerBlock, _blocks.SlotsPerBlock);
                rows.CopyTo(rest);
                rest = rest[rows.Length..];
            }
            changes.Put(CoefficientsPart, block, MemoryMarshal.AsBytes<double>(numbers));
            _blocks.MarkSaved(block);
        }
    }
}
