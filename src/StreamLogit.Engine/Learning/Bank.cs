using System.Buffers.Binary;
using System.Collections.Immutable;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Numerics;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Learning;

/// <summary>The settings that learn side by side from the same events, and their blend. Allocates nothing when it scores or learns.</summary>
internal sealed class Bank
{
    private const string ClockPart = "learning/clock";
    private readonly SlotBlocks _blocks;
    private readonly LearnerGroup[] _groups;
    private readonly Blend _blend;
    private readonly BankState _state;
    private readonly int _publishedSetting;
    private readonly double[] _settingWeights;
    private readonly SlotForgetting? _slotForgetting; // null where no feature forgets
    private readonly bool _freshNeedScore; // lessons that have their probabilities
    private ImmutableArray<long> _outdatedForgetting = []; // blocks that the next save must take away
    private WarmStart? _warmStart;
    private long _lastLabelMicroseconds = long.MinValue;
    private bool _isChanged = true;

    /// <summary>A bank without rules that need to know which slots are dense.</summary>
    public Bank(LearningOptions options, int slotCount) : this(options, slotCount, slotCount)
    {
    }

    /// <param name="options">The settings and what of them is published.</param>
    /// <param name="slotCount">Coefficient slots, the hashed and the dense ones together.</param>
    /// <param name="firstDenseSlot">Where the dense slots start, which are the last ones.</param>
    /// <param name="widestLanes">The widest lanes to use: 1, 2, 4 or 8. Changes no bit.</param>
    /// <param name="forgetHalfLifeOf">
    /// Gives the half-life of a slot's coefficients in microseconds, 0 for never or not known yet, or null where no slot has one.
    /// </param>
    /// <exception cref="ArgumentException">A rule does not suit the slots, or there are too many slots for the settings.</exception>
    public Bank(
        LearningOptions options, int slotCount, int firstDenseSlot, int widestLanes = RowWidth.Widest, Func<int, long>? forgetHalfLifeOf = null)
    {
        if (forgetHalfLifeOf is not null)
        {
            if (options.Bank.Any(setting => setting is NewtonSetting))
                throw new ArgumentException("The update rule newton cannot let the coefficients of single slots fade.");
            _slotForgetting = new SlotForgetting(slotCount, forgetHalfLifeOf);
            _freshNeedScore = options.Bank.Any(setting => setting is SgdSetting { IsOvershootProof: true });
        }
        Names = [.. options.Bank.Select(setting => setting.Name)];
        _publishedSetting = options.PublishedSetting is null ? -1 : Names.IndexOf(options.PublishedSetting);
        if (options.PublishedSetting is not null && _publishedSetting < 0)
            throw new ArgumentException($"The published setting '{options.PublishedSetting}' is not in the bank.", nameof(options));
        _blocks = new SlotBlocks(slotCount, LearnerGroup.DoublesPerSlot(options.Bank));
        ImmutableArray<LearnerGroup> groups = LearnerGroup.Create(options.Bank, _blocks, firstDenseSlot, widestLanes);
        _groups = [.. groups];
        double intercept = Elementary.Log(options.StartProbability) - Elementary.Log(1 - options.StartProbability);
        foreach (LearnerGroup group in groups)
            for (int lane = 0; lane < group.Settings.Length; lane++) group.Learner.StartIntercept(lane, intercept);
        _blend = Blend.Create(SettingCount, options.SwitchRate, widestLanes);
        _settingWeights = new double[SettingCount];
        _state = new BankState(Names, firstDenseSlot, _blocks, groups, _blend);
    }

    /// <summary>How many settings.</summary>
    public int SettingCount => Names.Length;

    /// <summary>Their names, in the bank's order.</summary>
    public ImmutableArray<string> Names { get; }

    /// <summary>
    /// Lets every setting start from coefficients that were fitted before. They stay where they are; what is learned is added to them, and
    /// what pulls coefficients towards 0 pulls them back to these. The start probability no longer counts. Only on a bank that has learned nothing.
    /// </summary>
    /// <param name="intercept">The intercept.</param>
    /// <param name="coefficients">The coefficient of every slot.</param>
    public void StartFrom(double intercept, ReadOnlySpan<double> coefficients)
    {
        ArgumentOutOfRangeException.ThrowIfNotEqual(coefficients.Length, _blocks.SlotCount);
        _warmStart = new WarmStart(intercept, coefficients);
        foreach (LearnerGroup group in _groups)
            for (int lane = 0; lane < group.Settings.Length; lane++) group.Learner.StartIntercept(lane, 0);
        _isChanged = true;
    }

    /// <summary>Scores an event with every setting. The coefficients are those after the last label, however long ago it was.</summary>
    /// <param name="x">The event.</param>
    /// <param name="timeMicroseconds">The stream's clock.</param>
    /// <param name="logOdds">Receives the log-odds of every setting.</param>
    /// <returns>The log-odds to publish, always finite.</returns>
    /// <exception cref="ArgumentOutOfRangeException">A slot is outside of the tables.</exception>
    public double Score(in EncodedVector x, long timeMicroseconds, Span<double> logOdds)
    {
        _blocks.Check(x.Slots);
        ScoreSettings(in x);
        foreach (LearnerGroup group in _groups) group.Scatter(group.Learner.LogOdds, logOdds[..SettingCount]);
        return _publishedSetting >= 0 ? logOdds[_publishedSetting] : _blend.LogOdds(logOdds[..SettingCount]);
    }

    /// <summary>Teaches every setting one label.</summary>
    /// <param name="x">The event as it was scored.</param>
    /// <param name="scoredLogOdds">What <see cref="Score"/> gave for it; losses and the blend go by this.</param>
    /// <param name="isFresh">Whether nothing was learned since, so that the settings would score the same now.</param>
    /// <param name="label">0 or 1.</param>
    /// <param name="weight">Its importance, 0 or more.</param>
    /// <param name="timeMicroseconds">The stream's clock.</param>
    /// <exception cref="ArgumentOutOfRangeException">A slot is outside of the tables.</exception>
    public void Learn(
        in EncodedVector x, ReadOnlySpan<double> scoredLogOdds, bool isFresh, int label, double weight, long timeMicroseconds)
    {
        _blocks.Mark(x.Slots);
        _isChanged = true;
        _blend.Learn(scoredLogOdds[..SettingCount], label, weight);

        // The gradients are those at the coefficients after the label before. Then these are pulled for the time since, and then moved.
        if (_slotForgetting is not null && (!isFresh || _freshNeedScore)) ScoreSettings(in x);
        double elapsed = AdvanceClock(timeMicroseconds);
        _slotForgetting?.Pull(x.Slots, _lastLabelMicroseconds, _groups);
        double offset = _warmStart?.LogOdds(in x) ?? 0;
        foreach (LearnerGroup group in _groups)
        {
            group.Learner.Learn(in x, new Lesson
            {
                Label = label,
                Weight = weight,
                ElapsedMicroseconds = elapsed,
                Offset = offset,
                IsScored = _slotForgetting is not null,
                MissProbability = isFresh ? group.Gather(_blend.MissProbability) : default,
            });
        }
    }

    /// <summary>Takes a label that was learned, and turned out to be wrong, back out of the loss totals of the settings.</summary>
    public void TakeBack(ReadOnlySpan<double> scoredLogOdds, int label, double weight)
    {
        _isChanged = true;
        _blend.TakeBack(scoredLogOdds[..SettingCount], label, weight);
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
        _slotForgetting?.Fade(x.Slots, _lastLabelMicroseconds, coefficients);
        _warmStart?.AddTo(in x, coefficients);
    }

    /// <summary>The intercept of what is published.</summary>
    public double PublishedIntercept()
    {
        if (_publishedSetting >= 0) return Intercept(_publishedSetting);
        _blend.Weights(_settingWeights);
        double sum = 0;
        for (int setting = 0; setting < SettingCount; setting++) sum += _settingWeights[setting] * Intercept(setting);
        return sum;
    }

    /// <summary>The intercept of a setting.</summary>
    public double Intercept(int setting) => Find(setting, out int lane).Intercept(lane) + (_warmStart?.Intercept ?? 0);

    /// <summary>The coefficient of a slot in a setting.</summary>
    public double Coefficient(int slot, int setting) =>
        Find(setting, out int lane).Coefficient(slot, lane) * (_slotForgetting?.Left(slot, _lastLabelMicroseconds) ?? 1) + (_warmStart?[slot] ?? 0);

    /// <summary>How many coefficients of a setting, without the intercept, are not 0, or not those of the warm start.</summary>
    public long NonZeroCount(int setting) => Find(setting, out int lane).NonZeroCount(lane);

    /// <summary>The weight of a setting in the blend, 0 to 1.</summary>
    public double BlendWeight(int setting)
    {
        Span<double> weights = stackalloc double[SettingCount];
        _blend.Weights(weights);
        return weights[setting];
    }

    /// <summary>The weight of every setting in the blend.</summary>
    public void BlendWeights(Span<double> weights) => _blend.Weights(weights);

    /// <summary>The sum of weight * log-loss of a setting over the labels learned, in nats.</summary>
    public double LogLossTotal(int setting) => _blend.LogLossTotal(setting);

    /// <summary>The sum of weight * (p - y)^2 of a setting over the labels learned.</summary>
    public double BrierTotal(int setting) => _blend.BrierTotal(setting);

    /// <summary>The sum of the weights of the labels that a setting learned; a setting that came later than others has less.</summary>
    public double WeightTotal(int setting) => _blend.WeightTotal(setting);

    /// <summary>Puts what changed since the last call into the parts <c>learning/...</c>.</summary>
    public void Save(StateBlocks changes)
    {
        foreach (long block in _outdatedForgetting) changes.Remove(SlotForgetting.Part, block);
        _outdatedForgetting = [];
        _slotForgetting?.Save(changes);
        if (!_isChanged) return;
        Span<byte> clock = stackalloc byte[sizeof(long)];
        BinaryPrimitives.WriteInt64LittleEndian(clock, _lastLabelMicroseconds);
        changes.Put(ClockPart, 0, clock);
        _warmStart?.Save(changes);
        _state.Save(changes);
        _isChanged = false;
    }

    /// <summary>
    /// Takes up a saved state. Only on a bank that has learned nothing. Settings that the state has too go on where they were; the others start
    /// from the coefficients of the saved blend and get an equal share of its weight. Half-lives of slots may differ from the saved ones, which count
    /// up to the last label that the state has learned.
    /// </summary>
    /// <exception cref="InvalidStateException">The state is damaged, or is about other slots.</exception>
    public BankChange Load(StateBlocks state)
    {
        byte[]? clock = state.Find(ClockPart, 0);
        if (clock is not { Length: sizeof(long) }) throw new InvalidStateException("The state has no clock of the bank.");
        _lastLabelMicroseconds = BinaryPrimitives.ReadInt64LittleEndian(clock);
        _warmStart = WarmStart.Load(state, _blocks.SlotCount);
        BankChange change = _state.Load(state);
        _isChanged = !_state.IsLayoutSaved | LoadForgetting(state);
        return change;
    }

    /// <returns>Whether coefficients were pulled, because their half-life is not that of the state.</returns>
    private bool LoadForgetting(StateBlocks state)
    {
        ImmutableArray<long> saved = [.. state.Read(SlotForgetting.Part).Select(block => block.Number)];
        if (_slotForgetting is not null) return _slotForgetting.Load(state, _lastLabelMicroseconds, _blocks, _groups);
        _outdatedForgetting = saved;
        return !saved.IsEmpty && new SlotForgetting(_blocks.SlotCount, _ => 0).Load(state, _lastLabelMicroseconds, _blocks, _groups);
    }

    private void ScoreSettings(in EncodedVector x)
    {
        double offset = _warmStart?.LogOdds(in x) ?? 0;
        if (_slotForgetting is null)
        {
            foreach (LearnerGroup group in _groups) group.Learner.Score(in x, offset);
            return;
        }
        EncodedVector faded = _slotForgetting.Faded(in x, _lastLabelMicroseconds);
        foreach (LearnerGroup group in _groups) group.Learner.Score(in faded, offset);
    }

    private ILearner Find(int setting, out int lane)
    {
        foreach (LearnerGroup group in _groups)
        {
            lane = group.Settings.IndexOf(setting);
            if (lane >= 0) return group.Learner;
        }
        throw new ArgumentOutOfRangeException(nameof(setting));
    }

    private double AdvanceClock(long timeMicroseconds)
    {
        long last = _lastLabelMicroseconds;
        if (timeMicroseconds <= last) return 0;
        _lastLabelMicroseconds = timeMicroseconds;
        return last == long.MinValue ? 0 : (double)timeMicroseconds - last;
    }
}
