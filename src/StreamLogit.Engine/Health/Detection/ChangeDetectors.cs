using System.Collections.Immutable;
using System.Globalization;
using System.Runtime.InteropServices;
using StreamLogit.Engine.Numerics;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Health.Detection;

/// <summary>
/// Watches the published log-loss, 32 labels at a time: two CUSUMs find that the odds have become twice or half of what is published, and an adaptive window finds that the mean
/// log-loss has changed. While nothing changes, all three together fire at most once in the number of labels that was asked for, on average.
/// </summary>
/// <remarks>
/// Weights do not matter here: how often labels are 1 given what was published does not depend on them. The CUSUMs take the published probabilities for true, so a
/// model that is still warming up makes them fire, and rightly; they start after the first labels. All take the order of labels not to depend on what they are: where bad
/// outcomes are reported sooner than good ones, the first weeks of labels look like a change.
/// </remarks>
internal sealed class ChangeDetectors
{
    /// <summary>Log-losses count up to this many nats: a probability of 1e-4 for what happened.</summary>
    public const double LargestLogLoss = 9.210340371976184;

    private const string Part = "health/detectors";
    private const int Detectors = 3;
    private const int GroupsPerCheck = 16; // looking for a cut costs much more than adding a group
    private const int KeptChanges = 64;
    private const double Ln2 = 0.69314718055994531;

    private readonly double _threshold;
    private readonly long _firstLabel;
    private readonly Adwin _adwin;
    private readonly List<DetectedChange> _changes = [];
    private LabelGroup _group;
    private ShiftCounts _higher;
    private ShiftCounts _lower;
    private long _logLossFired;
    private long _labels;
    private long _groups;
    private long _number;

    /// <param name="labelsPerFalseAlarm">The labels, on average, between two false alarms of all detectors together; at least 1,000.</param>
    /// <param name="firstLabel">How many labels pass before they watch.</param>
    public ChangeDetectors(long labelsPerFalseAlarm, long firstLabel)
    {
        // Each detector has a third of the false alarms. A step is a group of labels.
        double groups = Detectors * (double)labelsPerFalseAlarm / LabelGroup.Size;
        _threshold = Elementary.Log(groups);
        _adwin = new Adwin(GroupsPerCheck / groups);
        _firstLabel = firstLabel;
    }

    /// <summary>The changes found last, the latest first.</summary>
    public ImmutableArray<DetectedChange> Changes => [.. Enumerable.Reverse(_changes)];

    public ImmutableArray<DetectorFigures> Figures =>
    [
        new DetectorFigures("odds higher", _higher.Cusum.Sum, _threshold, _higher.Fired),
        new DetectorFigures("odds lower", _lower.Cusum.Sum, _threshold, _lower.Fired),
        new DetectorFigures("log-loss", _adwin.Count, double.NaN, _logLossFired),
    ];

    /// <summary>How many of the changes that are kept were found at or after a time.</summary>
    public int CountSince(long microseconds)
    {
        int count = 0;
        for (int i = _changes.Count - 1; i >= 0 && _changes[i].AtMicroseconds >= microseconds; i--) count++;
        return count;
    }

    /// <summary>The change found last, or null.</summary>
    public DetectedChange? Last => _changes.Count > 0 ? _changes[^1] : null;

    /// <summary>Takes in a run of labels.</summary>
    public void Add(LabelRun run)
    {
        ReadOnlySpan<double> probabilities = run.Probabilities, logLosses = run.LogLosses, labels = run.Labels;
        var clocks = run.Clocks;
        int i = (int)Math.Clamp(_firstLabel - _labels, 0, labels.Length);
        _labels += i;
        while (i < labels.Length)
        {
            if (_group.Count == 0) _group = new LabelGroup { StartMicroseconds = clocks[i], HigherProduct = 1, LowerProduct = 1 };
            int end = Math.Min(labels.Length, i + LabelGroup.Size - _group.Count);
            _labels += end - i;
            _group.Add(probabilities[i..end], logLosses[i..end], labels[i..end]);
            if (_group.Count == LabelGroup.Size) TakeGroup(clocks[end - 1]);
            i = end;
        }
    }

    public void Save(StateBlocks changes)
    {
        using var bytes = new MemoryStream();
        using var writer = new BinaryWriter(bytes);
        writer.Write(_labels);
        writer.Write(_groups);
        writer.Write(_number);
        writer.Write(_logLossFired);
        writer.Write(MemoryMarshal.AsBytes(MemoryMarshal.CreateReadOnlySpan(ref _group, 1)));
        writer.Write(MemoryMarshal.AsBytes(MemoryMarshal.CreateReadOnlySpan(ref _higher, 1)));
        writer.Write(MemoryMarshal.AsBytes(MemoryMarshal.CreateReadOnlySpan(ref _lower, 1)));
        _adwin.Save(writer);
        writer.Write(_changes.Count);
        foreach (var change in _changes) DetectedChangeFormat.Write(writer, change);
        changes.Put(Part, 0, bytes.ToArray());
    }

    public void Load(StateBlocks state)
    {
        byte[] bytes = state.Find(Part, 0) ?? throw new InvalidStateException($"the state has no {Part}");
        using var reader = new BinaryReader(new MemoryStream(bytes));
        _labels = reader.ReadInt64();
        _groups = reader.ReadInt64();
        _number = reader.ReadInt64();
        _logLossFired = reader.ReadInt64();
        reader.BaseStream.ReadExactly(MemoryMarshal.AsBytes(MemoryMarshal.CreateSpan(ref _group, 1)));
        reader.BaseStream.ReadExactly(MemoryMarshal.AsBytes(MemoryMarshal.CreateSpan(ref _higher, 1)));
        reader.BaseStream.ReadExactly(MemoryMarshal.AsBytes(MemoryMarshal.CreateSpan(ref _lower, 1)));
        _adwin.Load(reader);
        for (int count = reader.ReadInt32(); count > 0; count--) _changes.Add(DetectedChangeFormat.Read(reader));
    }

    private void TakeGroup(long clockMicroseconds)
    {
        if (Shift(ref _higher, Ln2, _group.HigherProduct)) ReportShift(ref _higher, "odds higher", clockMicroseconds);
        if (Shift(ref _lower, -Ln2, _group.LowerProduct)) ReportShift(ref _lower, "odds lower", clockMicroseconds);
        const double Scale = 1 / LargestLogLoss;
        double mean = _group.LogLoss / _group.Count;
        _adwin.AddRun(new AdwinRun
        {
            Count = _group.Count,
            Sum = _group.LogLoss * Scale,
            SumOfSquares = Math.Max(_group.SquaredLogLoss - mean * _group.LogLoss, 0) * (Scale * Scale),
            StartMicroseconds = _group.StartMicroseconds,
        });
        _group = default;
        if (++_groups % GroupsPerCheck == 0 && _adwin.Check() is { } cut) ReportCut(cut, clockMicroseconds);
    }

    private bool Shift(ref ShiftCounts shift, double logOddsRatio, double product)
    {
        if (shift.Cusum.Sum <= 0) (shift.Labels, shift.Positives, shift.Probability) = (0, 0, 0);
        shift.Cusum.Add(logOddsRatio, _group.Positives, product, _group.StartMicroseconds, _labels - _group.Count);
        shift.Labels += _group.Count;
        shift.Positives += _group.Positives;
        shift.Probability += _group.Probability;
        return shift.Cusum.Sum >= _threshold;
    }

    private void ReportShift(ref ShiftCounts shift, string detector, long clockMicroseconds)
    {
        double expected = shift.Probability, came = shift.Positives;
        string sentence = string.Create(CultureInfo.InvariantCulture,
            $"Of the last {shift.Labels:N0} labels {expected:N1} were promised to be bad, {came:N0} were.");
        Report(detector, clockMicroseconds, shift.Cusum.SinceMicroseconds, shift.Cusum.SinceLabel, expected / shift.Labels, came / shift.Labels, sentence);
        shift = new ShiftCounts { Fired = shift.Fired + 1 };
    }

    private void ReportCut(in AdwinCut cut, long clockMicroseconds)
    {
        double before = cut.MeanBefore * LargestLogLoss, after = cut.MeanAfter * LargestLogLoss;
        _logLossFired++;
        string sentence = string.Create(CultureInfo.InvariantCulture,
            $"Mean log-loss went from {before:F4} over {cut.CountBefore:N0} labels to {after:F4} over the last {cut.CountAfter:N0}.");
        Report("log-loss", clockMicroseconds, cut.SinceMicroseconds, _labels - cut.CountAfter, before, after, sentence);
    }

    private void Report(string detector, long clock, long since, long sinceLabel, double before, double after, string sentence)
    {
        if (_changes.Count == KeptChanges) _changes.RemoveAt(0);
        _changes.Add(new DetectedChange(++_number, detector, clock, _labels, since, sinceLabel, before, after, sentence));
    }
}
