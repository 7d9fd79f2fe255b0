using System.Collections.Immutable;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Numerics;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Learning;

/// <summary>The settings that learn side by side from the same events, and their blend. Allocates nothing when it scores or learns.</summary>
internal sealed class Bank
{
    private readonly SlotBlocks _blocks;
    private readonly ImmutableArray<LearnerGroup> _groups;
    private readonly Blend _blend;
    private readonly int _publishedSetting;
    private readonly double[] _settingWeights;
    private readonly BankState _state;

    /// <param name="options">The settings and what of them is published.</param>
    /// <param name="slotCount">Coefficient slots, the dense and the hashed ones together.</param>
    public Bank(LearningOptions options, int slotCount) : this(options, slotCount, RowWidth.Widest)
    {
    }

    /// <param name="options">The settings and what of them is published.</param>
    /// <param name="slotCount">Coefficient slots, the dense and the hashed ones together.</param>
    /// <param name="widestLanes">The widest lanes to use: 1, 2, 4 or 8. Changes no bit.</param>
    internal Bank(LearningOptions options, int slotCount, int widestLanes)
    {
        Names = [.. options.Bank.Select(setting => setting.Name)];
        _publishedSetting = options.PublishedSetting is null ? -1 : Names.IndexOf(options.PublishedSetting);
        if (options.PublishedSetting is not null && _publishedSetting < 0)
            throw new ArgumentException($"The published setting '{options.PublishedSetting}' is not in the bank.", nameof(options));
        _blocks = new SlotBlocks(slotCount, LearnerGroup.DoublesPerSlot(options.Bank));
        _groups = LearnerGroup.Create(options.Bank, _blocks, widestLanes);
        double intercept = Elementary.Log(options.StartProbability) - Elementary.Log(1 - options.StartProbability);
        foreach (LearnerGroup group in _groups) group.Learner.StartAt(intercept);
        _blend = Blend.Create(SettingCount, options.SwitchRate, widestLanes);
        _settingWeights = new double[SettingCount];
        _state = new BankState(Names, _blocks, _groups, _blend);
    }

    /// <summary>How many settings.</summary>
    public int SettingCount => Names.Length;

    /// <summary>Their names, in the bank's order.</summary>
    public ImmutableArray<string> Names { get; }

    /// <summary>Scores an event with every setting.</summary>
    /// <param name="x">The event.</param>
    /// <param name="timeMicroseconds">The stream's clock.</param>
    /// <param name="logOdds">Receives the log-odds of every setting.</param>
    /// <returns>The log-odds to publish, always finite.</returns>
    /// <exception cref="ArgumentOutOfRangeException">A slot is outside of the tables.</exception>
    public double Score(in EncodedVector x, long timeMicroseconds, Span<double> logOdds)
    {
        _blocks.Check(x.Slots);
        foreach (LearnerGroup group in _groups)
        {
            group.Learner.Score(in x);
            group.Scatter(group.Learner.LogOdds, logOdds);
        }
        if (_publishedSetting >= 0) return logOdds[_publishedSetting];
        return SettingCount == 1 ? logOdds[0] : _blend.LogOdds(logOdds[..SettingCount]);
    }

    /// <summary>Teaches every setting one label.</summary>
    /// <param name="x">The event as it was scored.</param>
    /// <param name="scoredLogOdds">What <see cref="Score"/> gave for it; losses and the blend go by this.</param>
    /// <param name="isFresh">Whether nothing was learned since, so that the settings would score the same now.</param>
    /// <param name="label">0 or 1.</param>
    /// <param name="weight">Its importance, 0 or more.</param>
    /// <param name="timeMicroseconds">The stream's clock.</param>
    /// <exception cref="IndexOutOfRangeException">A slot is outside of the tables.</exception>
    public void Learn(
        in EncodedVector x, ReadOnlySpan<double> scoredLogOdds, bool isFresh, int label, double weight, long timeMicroseconds)
    {
        _blocks.Mark(x.Slots);
        _state.MarkChanged();
        _blend.Learn(scoredLogOdds[..SettingCount], label, weight);
        foreach (LearnerGroup group in _groups)
            group.Learner.Learn(in x, label, weight, isFresh ? group.Gather(_blend.MissProbability) : default);
    }

    /// <summary>The coefficient of each entry of x in what is published: that of the published setting, or the mean weighted as the blend.</summary>
    public void PublishedCoefficients(in EncodedVector x, Span<double> coefficients)
    {
        _blocks.Check(x.Slots);
        if (_publishedSetting < 0) _blend.Weights(_settingWeights);
        else _settingWeights[_publishedSetting] = 1;
        coefficients[..x.Slots.Length].Clear();
        foreach (LearnerGroup group in _groups)
            group.Learner.AddCoefficients(in x, group.Gather(_settingWeights), coefficients);
    }

    /// <summary>The intercept of a setting.</summary>
    public double Intercept(int setting) => LearnerGroup.Find(_groups, setting, out int lane).Intercept(lane);

    /// <summary>The coefficient of a slot in a setting.</summary>
    public double Coefficient(int slot, int setting) => LearnerGroup.Find(_groups, setting, out int lane).Coefficient(slot, lane);

    /// <summary>The weight of a setting in the blend, 0 to 1.</summary>
    public double BlendWeight(int setting)
    {
        Span<double> weights = stackalloc double[SettingCount];
        _blend.Weights(weights);
        return weights[setting];
    }

    /// <summary>The sum of weight * log-loss of a setting over the labels learned, in nats.</summary>
    public double LogLossTotal(int setting) => _blend.LogLossTotal(setting);

    /// <summary>The sum of weight * (p - y)^2 of a setting over the labels learned.</summary>
    public double BrierTotal(int setting) => _blend.BrierTotal(setting);

    /// <summary>Puts what changed since the last call into the parts <c>learning/...</c>.</summary>
    public void Save(StateBlocks changes) => _state.Save(changes);

    /// <summary>Takes up a saved state. Only on a bank that has learned nothing.</summary>
    /// <exception cref="InvalidStateException">The state is damaged or belongs to another bank.</exception>
    public void Load(StateBlocks state) => _state.Load(state);
}
