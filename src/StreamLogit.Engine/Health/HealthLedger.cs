using System.Collections.Immutable;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Persistence;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Health;

/// <summary>Counts what happens and keeps the sums from which health is told, always of the probabilities that were published.</summary>
internal sealed class HealthLedger
{
    private const string Part = "health/counts";
    private static readonly RejectReason[] Reasons = [.. Enum.GetValues<RejectReason>().Where(r => r != RejectReason.None)];

    private readonly HealthOptions _options;
    private readonly MinuteRing _minutes;
    private readonly LastLabels _last;
    private readonly long[] _rejects = new long[Reasons.Max(r => (int)r) + 1];
    private LabelSums _total;
    private BaseRate _baseRate;

    public HealthLedger(HealthOptions options)
    {
        _options = options;
        _minutes = new MinuteRing(options.Windows.Select(w => (int)(w.LengthMicroseconds / 60_000_000)).DefaultIfEmpty(1).Max());
        _last = new LastLabels(options.LastLabels);
    }

    /// <summary>Labels learned.</summary>
    public long Labelled => _total.Count;

    public void CountReject(RejectReason reason) => _rejects[(int)reason]++;

    /// <summary>Counts a label against the log-odds that were published for its event.</summary>
    public LabelCount CountLabel(long clockMicroseconds, double logOdds, int label, double weight)
    {
        double baseRate = _baseRate.Probability;
        _baseRate.Learn(label, weight);
        var sums = LabelSums.Of(logOdds, baseRate, label, weight);
        _total.Add(sums);
        return new LabelCount(_minutes.Add(clockMicroseconds, sums), _last.Add(sums), baseRate, (float)weight);
    }

    /// <summary>Counts a label as its opposite, in every window that it is still in.</summary>
    /// <param name="counted">How it was counted.</param>
    /// <param name="logOdds">The log-odds that were published.</param>
    /// <param name="label">What it is now.</param>
    /// <param name="weight">What it weighs now.</param>
    /// <returns>How it is counted now.</returns>
    public LabelCount CorrectLabel(in LabelCount counted, double logOdds, int label, double weight)
    {
        var wrong = LabelSums.Of(logOdds, counted.BaseRate, 1 - label, counted.Weight);
        var right = LabelSums.Of(logOdds, counted.BaseRate, label, weight);
        _baseRate.Ones += right.Positive - wrong.Positive;
        _baseRate.Labels += right.Weight - wrong.Weight;
        _total.Subtract(wrong);
        _total.Add(right);
        _minutes.Replace(counted.Minute, wrong, right);
        _last.Replace(counted.Sequence, right);
        return counted with { Weight = (float)weight };
    }

    /// <summary>The figures of now.</summary>
    public HealthSnapshot Snapshot(long? clockMicroseconds)
    {
        var windows = _options.Windows
            .Select(w => new WindowFigures(w.Name, _minutes.Window(clockMicroseconds ?? 0, w.LengthMicroseconds).ToFigures()))
            .Append(new WindowFigures(FormattableString.Invariant($"last {_options.LastLabels} labels"), _last.Window().ToFigures()));
        return new HealthSnapshot
        {
            ClockMicroseconds = clockMicroseconds,
            Labelled = _total.Count,
            Rejected = _rejects.Sum(),
            RejectsByReason = Reasons.Where(r => _rejects[(int)r] > 0).ToImmutableSortedDictionary(r => r.Code(), r => _rejects[(int)r], StringComparer.Ordinal),
            Total = _total.ToFigures(),
            Windows = [.. windows],
        };
    }

    public void Save(StateBlocks changes)
    {
        using var bytes = new MemoryStream();
        using var writer = new BinaryWriter(bytes);
        WriteSums(writer, _total);
        writer.Write(_baseRate.Ones);
        writer.Write(_baseRate.Labels);
        writer.Write(_rejects.Length);
        foreach (long count in _rejects) writer.Write(count);
        changes.Put(Part, 0, bytes.ToArray());
        _minutes.Save(changes);
        _last.Save(changes);
    }

    public void Load(StateBlocks state)
    {
        byte[] bytes = state.Find(Part, 0) ?? throw new InvalidStateException($"the state has no {Part}");
        using var reader = new BinaryReader(new MemoryStream(bytes));
        _total = ReadSums(reader);
        _baseRate.Ones = reader.ReadDouble();
        _baseRate.Labels = reader.ReadDouble();
        int reasons = reader.ReadInt32();
        for (int i = 0; i < reasons; i++) _rejects[i] = reader.ReadInt64();
        _minutes.Load(state);
        _last.Load(state);
    }

    private static void WriteSums(BinaryWriter writer, in LabelSums sums)
    {
        writer.Write(sums.Count);
        writer.Write(sums.Weight);
        writer.Write(sums.LogLoss);
        writer.Write(sums.BaseRateLogLoss);
        writer.Write(sums.Brier);
        writer.Write(sums.Probability);
        writer.Write(sums.Positive);
    }

    private static LabelSums ReadSums(BinaryReader reader) => new()
    {
        Count = reader.ReadInt64(),
        Weight = reader.ReadDouble(),
        LogLoss = reader.ReadDouble(),
        BaseRateLogLoss = reader.ReadDouble(),
        Brier = reader.ReadDouble(),
        Probability = reader.ReadDouble(),
        Positive = reader.ReadDouble(),
    };
}
