using System.Collections.Immutable;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Learning;

/// <summary>The settings of one update rule, and where they stand in the bank.</summary>
internal sealed class LearnerGroup
{
    private readonly ImmutableArray<int> _settings;
    private readonly bool _isWholeBank;
    private readonly double[] _row;

    private LearnerGroup(ILearner learner, ImmutableArray<int> settings, int bankSize)
    {
        Learner = learner;
        _settings = settings;
        _isWholeBank = settings.Length == bankSize;
        _row = new double[learner.RowLength];
    }

    public ILearner Learner { get; }

    /// <summary>The places of this group's settings in the bank.</summary>
    public ImmutableArray<int> Settings => _settings;

    /// <summary>One group for every rule that occurs, in the order of the first setting of each.</summary>
    public static ImmutableArray<LearnerGroup> Create(ImmutableArray<SettingOptions> bank, SlotBlocks blocks, int widestLanes)
    {
        var groups = ImmutableArray.CreateBuilder<LearnerGroup>();
        foreach (var rule in bank.Select((setting, index) => (setting, index)).GroupBy(s => s.setting.GetType()))
        {
            int lanes = RowWidth.Lanes(RowWidth.Padded(rule.Count()), widestLanes);
            SettingOptions[] settings = [.. rule.Select(s => s.setting)];
            groups.Add(new LearnerGroup(CreateLearner(settings, blocks, lanes), [.. rule.Select(s => s.index)], bank.Length));
        }
        return groups.ToImmutable();
    }

    /// <summary>What a slot of that bank takes.</summary>
    public static int DoublesPerSlot(ImmutableArray<SettingOptions> bank) =>
        bank.GroupBy(setting => setting.GetType()).Sum(rule => RowWidth.Padded(rule.Count()));

    /// <summary>The learner of a setting of the bank, and its lane there.</summary>
    public static ILearner Find(ImmutableArray<LearnerGroup> groups, int setting, out int lane)
    {
        foreach (LearnerGroup group in groups)
        {
            lane = group._settings.IndexOf(setting);
            if (lane >= 0) return group.Learner;
        }
        throw new ArgumentOutOfRangeException(nameof(setting));
    }

    /// <summary>Copies the group's row to the places of its settings in the bank.</summary>
    public void Scatter(ReadOnlySpan<double> row, Span<double> bank)
    {
        if (_isWholeBank)
        {
            row[.._settings.Length].CopyTo(bank);
            return;
        }
        for (int lane = 0; lane < _settings.Length; lane++) bank[_settings[lane]] = row[lane];
    }

    /// <summary>The group's row of a number that the bank has for every setting.</summary>
    public ReadOnlySpan<double> Gather(ReadOnlySpan<double> bank)
    {
        if (_isWholeBank && bank.Length == _row.Length) return bank;
        for (int lane = 0; lane < _settings.Length; lane++) _row[lane] = bank[_settings[lane]];
        return _row;
    }

    private static ILearner CreateLearner(SettingOptions[] settings, SlotBlocks blocks, int lanes) => lanes switch
    {
        8 => CreateLearner<Lanes8>(settings, blocks),
        4 => CreateLearner<Lanes4>(settings, blocks),
        2 => CreateLearner<Lanes2>(settings, blocks),
        _ => CreateLearner<Lanes1>(settings, blocks),
    };

    private static SgdLearner<T> CreateLearner<T>(SettingOptions[] settings, SlotBlocks blocks) where T : struct, ILanes<T> => settings[0] switch
    {
        SgdSetting => new SgdLearner<T>([.. settings.Cast<SgdSetting>()], blocks),
        var other => throw new ArgumentException($"No update rule is known for {other.GetType().Name}."),
    };
}
