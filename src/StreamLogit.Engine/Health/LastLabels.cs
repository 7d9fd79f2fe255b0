using System.Runtime.InteropServices;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Health;

/// <summary>The window of the last labels, however long ago they came: a ring, field by field, so that a run of labels is copied at once.</summary>
internal sealed class LastLabels
{
    private const string Part = "health/last";
    private const int LabelsPerBlock = 256;
    private const int BytesPerLabel = 4 * sizeof(double) + 1;

    private readonly int _window;
    private readonly double[] _logOdds;
    private readonly double[] _weights;
    private readonly double[] _baseRateLogLosses;
    private readonly double[] _labels;
    private readonly bool[] _alerts;
    private readonly DirtyBlocks _dirty;
    private long _firstKnown; // the ring may have been shorter once
    private int _place; // of the next one
    private int _obsoleteBlocks;

    /// <param name="window">How many labels it has.</param>
    public LastLabels(int window)
    {
        _window = window;
        _logOdds = new double[window];
        _weights = new double[window];
        _baseRateLogLosses = new double[window];
        _labels = new double[window];
        _alerts = new bool[window];
        _dirty = new DirtyBlocks(window, LabelsPerBlock);
    }

    /// <summary>Labels ever added.</summary>
    public long Added { get; private set; }

    /// <summary>The number, counted from 0, of the oldest label in the window.</summary>
    public long First => Math.Max(_firstKnown, Added - _window);

    /// <summary>The label of a number in the window.</summary>
    public LastLabel this[long number]
    {
        get
        {
            int place = (int)(number % _window);
            return new LastLabel
            {
                LogOdds = _logOdds[place],
                Weight = _weights[place],
                BaseRateLogLoss = _baseRateLogLosses[place],
                Label = (int)_labels[place],
                Alert = _alerts[place] ? 1 : 0,
            };
        }
    }

    public void Add(LabelRun run)
    {
        for (int first = 0; first < run.Count;)
        {
            // As many as share a block.
            int room = Math.Min(_window, (_place | (LabelsPerBlock - 1)) + 1) - _place;
            int count = Math.Min(run.Count - first, room);
            run.LogOdds.Slice(first, count).CopyTo(_logOdds.AsSpan(_place));
            run.Weights.Slice(first, count).CopyTo(_weights.AsSpan(_place));
            run.BaseRateLogLosses.Slice(first, count).CopyTo(_baseRateLogLosses.AsSpan(_place));
            run.Labels.Slice(first, count).CopyTo(_labels.AsSpan(_place));
            run.Alerts.Slice(first, count).CopyTo(_alerts.AsSpan(_place));
            _dirty.Mark(_place);
            _place = _place + count == _window ? 0 : _place + count;
            Added += count;
            first += count;
        }
    }

    /// <summary>Puts another in the place of a label, if that is in the window.</summary>
    public void Replace(long number, in LastLabel label)
    {
        if (number < First || number >= Added) return;
        Put((int)(number % _window), label);
        _dirty.Mark((int)(number % _window));
    }

    public void Save(StateBlocks changes)
    {
        for (; _obsoleteBlocks > _dirty.Count; _obsoleteBlocks--) changes.Remove(Part, _obsoleteBlocks - 1);
        ReadOnlySpan<long> head = [_window, Added, _firstKnown];
        changes.Put(Part, -1, MemoryMarshal.AsBytes(head));
        Span<byte> bytes = stackalloc byte[LabelsPerBlock * BytesPerLabel];
        foreach (var (number, range) in _dirty.Take())
        {
            var rest = bytes;
            foreach (double[] field in Fields()) rest = Write(MemoryMarshal.AsBytes(field.AsSpan(range)), rest);
            rest = Write(MemoryMarshal.AsBytes(_alerts.AsSpan(range)), rest);
            changes.Put(Part, number, bytes[..^rest.Length]);
        }
    }

    /// <summary>Takes up the labels; where the ring had another length, as many of them as there are and fit.</summary>
    public void Load(StateBlocks state)
    {
        byte[] head = state.Find(Part, -1) ?? throw new InvalidStateException($"the state has no {Part}");
        var numbers = MemoryMarshal.Cast<byte, long>(head);
        (long length, long added, long firstKnown) = (numbers[0], numbers[1], numbers[2]);
        var saved = new LastLabels((int)length);
        foreach (var (number, bytes) in state.Read(Part))
        {
            if (number < 0) continue;
            if (number * LabelsPerBlock >= length) throw new InvalidStateException($"block {number} of {Part} lies outside of its ring");
            saved.ReadBlock((int)number * LabelsPerBlock, bytes);
            _obsoleteBlocks = (int)number + 1;
        }
        _firstKnown = Math.Max(firstKnown, added - Math.Min(length, _window));
        for (long i = _firstKnown; i < added; i++) Put((int)(i % _window), saved[i]);
        Added = added;
        _place = (int)(added % _window);
        if (length != _window) _dirty.MarkAll();
    }

    private void Put(int place, in LastLabel label)
    {
        _logOdds[place] = label.LogOdds;
        _weights[place] = label.Weight;
        _baseRateLogLosses[place] = label.BaseRateLogLoss;
        _labels[place] = label.Label;
        _alerts[place] = label.Alert != 0;
    }

    private double[][] Fields() => [_logOdds, _weights, _baseRateLogLosses, _labels];

    private void ReadBlock(int place, ReadOnlySpan<byte> bytes)
    {
        int count = Math.Min(LabelsPerBlock, _window - place);
        if (bytes.Length != count * BytesPerLabel) throw new InvalidStateException($"a block of {Part} has another length");
        foreach (double[] field in Fields())
        {
            MemoryMarshal.Cast<byte, double>(bytes[..(count * sizeof(double))]).CopyTo(field.AsSpan(place));
            bytes = bytes[(count * sizeof(double))..];
        }
        for (int i = 0; i < count; i++) _alerts[place + i] = bytes[i] != 0;
    }

    private static Span<byte> Write(ReadOnlySpan<byte> bytes, Span<byte> target)
    {
        bytes.CopyTo(target);
        return target[bytes.Length..];
    }
}
