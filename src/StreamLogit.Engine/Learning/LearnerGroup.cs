using System.Collections.Immutable;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Learning;

/// <summary>The settings of one update rule, and where they stand in the bank.</summary>
internal sealed class LearnerGroup
{
    private readonly ImmutableArray<int> _settings;
    private readonly bool _isWholeBank;
    private readonly AlignedDoubles _row;

    private LearnerGroup(string rule, ILearner learner, ImmutableArray<int> settings, int bankSize)
    {
        Rule = rule;
        Learner = learner;
        _settings = settings;
        _isWholeBank = settings.Length == bankSize;
        _row = new AlignedDoubles(learner.RowLength);
    }

    public ILearner Learner { get; }

    /// <summary>The places of this group's settings in the bank.</summary>
    public ImmutableArray<int> Settings => _settings;

    /// <summary>The name of the rule.</summary>
    public string Rule { get; }

    /// <summary>One group for every rule that occurs, in the order of the first setting of each.</summary>
    public static ImmutableArray<LearnerGroup> Create(
        ImmutableArray<SettingOptions> bank, SlotBlocks blocks, int firstDenseSlot, int widestLanes)
    {
        var groups = ImmutableArray.CreateBuilder<LearnerGroup>();
        foreach (var rule in bank.Select((setting, index) => (setting, index)).GroupBy(s => s.setting.GetType()))
        {
            SettingOptions[] settings = [.. rule.Select(s => s.setting)];
            ILearner learner = RowWidth.Lanes(RowWidth.Padded(settings.Length), widestLanes) switch
            {
                8 => CreateLearner<Lanes8>(settings, blocks, firstDenseSlot),
                4 => CreateLearner<Lanes4>(settings, blocks, firstDenseSlot),
                2 => CreateLearner<Lanes2>(settings, blocks, firstDenseSlot),
                _ => CreateLearner<Lanes1>(settings, blocks, firstDenseSlot),
            };
            groups.Add(new LearnerGroup(rule.Key.Name, learner, [.. rule.Select(s => s.index)], bank.Length));
        }
        return groups.ToImmutable();
    }

    /// <summary>What a slot of that bank takes.</summary>
    public static int DoublesPerSlot(ImmutableArray<SettingOptions> bank) =>
        bank.GroupBy(setting => setting.GetType()).Sum(rule => RowWidth.Padded(rule.Count()) * RowsPerSlot(rule.First()));

    /// <summary>Copies the group's row to the places of its settings in the bank.</summary>
    public void Scatter(ReadOnlySpan<double> row, Span<double> bank)
    {
        if (_isWholeBank)
        {
            for (int setting = 0; setting < bank.Length && setting < row.Length; setting++) bank[setting] = row[setting];
            return;
        }
        for (int lane = 0; lane < _settings.Length; lane++) bank[_settings[lane]] = row[lane];
    }

    /// <summary>The group's row of a number that the bank has for every setting.</summary>
    public ReadOnlySpan<double> Gather(ReadOnlySpan<double> bank)
    {
        if (_isWholeBank && bank.Length == _row.Length) return bank;
        for (int lane = 0; lane < _settings.Length; lane++) _row[lane] = bank[_settings[lane]];
        return _row.Span;
    }

    private static ILearner CreateLearner<T>(SettingOptions[] settings, SlotBlocks blocks, int firstDenseSlot)
        where T : struct, ILanes<T> => settings[0] switch
    {
        SgdSetting => new SgdLearner<T>([.. settings.Cast<SgdSetting>()], blocks),
        AdagradSetting => new AdagradLearner<T>([.. settings.Cast<AdagradSetting>()], blocks),
        FtrlSetting => new FtrlLearner<T>([.. settings.Cast<FtrlSetting>()], blocks),
        NewtonSetting => new NewtonLearner<T>([.. settings.Cast<NewtonSetting>()], firstDenseSlot, blocks.SlotCount),
        var other => throw new ArgumentException($"No update rule is known for {other.GetType().Name}."),
    };

    private static int RowsPerSlot(SettingOptions setting) => setting switch
    {
        AdagradSetting => AdagradLearner<Lanes1>.SlotRows,
        FtrlSetting => FtrlLearner<Lanes1>.SlotRows,
        NewtonSetting => 0,
        _ => 1,
    };
}
