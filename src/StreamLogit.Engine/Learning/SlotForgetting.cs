using System.Runtime.InteropServices;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Numerics;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Learning;

/// <summary>
/// Slots whose coefficients fade with a half-life of their own, alike in all settings. The rows of a slot are pulled when a label is learned from it, for all the
/// time since they were last; in between, scores count with what is left of them, and a score writes nothing.
/// </summary>
internal sealed class SlotForgetting
{
    public const string Part = "learning/slot-forgetting";

    /// <summary>What it keeps for a slot.</summary>
    public const int BytesPerSlot = 16;

    private const double Never = -1;
    private readonly Entry[] _entries;
    private readonly DirtyBlocks _dirty;
    private readonly Func<int, long> _halfLifeOf;
    private double[] _values = [];

    /// <param name="slotCount">Slots.</param>
    /// <param name="halfLifeOf">Gives the half-life of a slot in microseconds, 0 for never or not known yet.</param>
    public SlotForgetting(int slotCount, Func<int, long> halfLifeOf)
    {
        _entries = new Entry[slotCount];
        _dirty = new DirtyBlocks(slotCount, slotsPerBlock: 1024);
        _halfLifeOf = halfLifeOf;
    }

    /// <summary>The share, 0 to 1, that is left at a time of the coefficients in a slot's rows.</summary>
    public double Left(int slot, long timeMicroseconds)
    {
        ref readonly Entry entry = ref _entries[slot];
        return entry.Rate <= 0 || timeMicroseconds <= entry.PulledAtMicroseconds ? 1 : entry.LeftAt(timeMicroseconds);
    }

    /// <summary>An event with every value multiplied by what is left of its coefficient. Valid until the next call.</summary>
    public EncodedVector Faded(in EncodedVector x, long timeMicroseconds)
    {
        if (_values.Length < x.Values.Length) _values = new double[x.Values.Length];
        Span<double> values = _values.AsSpan(0, x.Values.Length);
        x.Values.CopyTo(values);
        Fade(x.Slots, timeMicroseconds, values);
        return new EncodedVector(x.Slots, values);
    }

    /// <summary>Multiplies the number of each slot by what is left of the slot's coefficients.</summary>
    public void Fade(ReadOnlySpan<int> slots, long timeMicroseconds, Span<double> numbers)
    {
        for (int i = 0; i < slots.Length; i++)
        {
            ref readonly Entry entry = ref _entries[slots[i]];
            if (entry.Rate > 0 && timeMicroseconds > entry.PulledAtMicroseconds) numbers[i] *= entry.LeftAt(timeMicroseconds);
        }
    }

    /// <summary>Pulls the rows of slots that are about to be learned. They must have been marked.</summary>
    public void Pull(ReadOnlySpan<int> slots, long timeMicroseconds, ReadOnlySpan<LearnerGroup> groups)
    {
        foreach (int slot in slots)
        {
            ref Entry entry = ref _entries[slot];
            if (entry.Rate < 0 || entry.Rate > 0 && timeMicroseconds <= entry.PulledAtMicroseconds) continue;
            if (entry.Rate == 0) entry.Rate = RateOf(slot) is > 0 and var rate ? rate : Never;
            else Pull(slot, entry.LeftAt(timeMicroseconds), groups);
            entry.PulledAtMicroseconds = timeMicroseconds;
            _dirty.Mark(slot);
        }
    }

    public void Save(StateBlocks changes)
    {
        foreach (var (number, range) in _dirty.Take())
            changes.Put(Part, number, MemoryMarshal.AsBytes(_entries.AsSpan(range)));
    }

    /// <summary>
    /// Takes up a saved state. Slots that have another half-life than there, or for the first time one, are pulled up to a time by the old one, and fade by the new
    /// one from then on.
    /// </summary>
    /// <returns>Whether any rows were pulled.</returns>
    /// <exception cref="InvalidStateException">The state is damaged.</exception>
    public bool Load(StateBlocks state, long timeMicroseconds, SlotBlocks blocks, ReadOnlySpan<LearnerGroup> groups)
    {
        foreach (var (number, bytes) in state.Read(Part))
        {
            var block = MemoryMarshal.AsBytes(_entries.AsSpan(_dirty.RangeOf(number)));
            if (block.Length != bytes.Length) throw new InvalidStateException($"block {number} of {Part} has {bytes.Length} bytes, not {block.Length}");
            bytes.CopyTo(block);
        }
        if (timeMicroseconds == long.MinValue) return false; // no label yet, so no coefficients
        bool isAnyPulled = false;
        for (int slot = 0; slot < _entries.Length; slot++)
        {
            ref Entry entry = ref _entries[slot];
            double rate = RateOf(slot);
            if (rate == Math.Max(entry.Rate, 0)) continue;
            if (entry.Rate > 0)
            {
                blocks.Mark([slot]);
                Pull(slot, Left(slot, timeMicroseconds), groups);
                isAnyPulled = true;
            }
            entry = new Entry { Rate = rate > 0 ? rate : Never, PulledAtMicroseconds = timeMicroseconds };
            _dirty.Mark(slot);
        }
        return isAnyPulled;
    }

    private static void Pull(int slot, double left, ReadOnlySpan<LearnerGroup> groups)
    {
        foreach (LearnerGroup group in groups) group.Learner.Pull(slot, left);
    }

    private double RateOf(int slot) => _halfLifeOf(slot) is > 0 and var halfLife ? Elementary.Ln2 / halfLife : 0;

    private struct Entry
    {
        /// <summary>Per microsecond; 0 where the slot has not been learned yet, and below for never.</summary>
        public double Rate;
        public long PulledAtMicroseconds;

        public readonly double LeftAt(long timeMicroseconds) => Elementary.Exp(-Rate * (timeMicroseconds - PulledAtMicroseconds));
    }
}
