using System.Numerics;
using System.Runtime.InteropServices;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Health.Cohorts;

/// <summary>The sums of the last hours, or days, by the time at which events were scored.</summary>
/// <param name="part">The part of the state in which it is kept.</param>
/// <param name="kept">How many of them are kept.</param>
internal sealed class CohortRing(string part, int kept)
{
    private const int PerBlock = 16;

    // A power of two, so that a place is found without a division.
    private readonly CohortSums[] _sums = new CohortSums[RoomFor(kept)];
    private readonly DirtyBlocks _dirty = new(RoomFor(kept), PerBlock);
    private long _first = long.MaxValue; // the first that ever was
    private long _open = long.MinValue;
    private int _obsoleteBlocks;

    /// <summary>The first one kept.</summary>
    public long First => IsEmpty ? 0 : Math.Max(_first, _open - kept + 1);

    /// <summary>The present one.</summary>
    public long Open => IsEmpty ? -1 : _open;

    private bool IsEmpty => _open == long.MinValue;

    /// <summary>Opens one that is not before the present one.</summary>
    public void MoveTo(long number)
    {
        if (IsEmpty)
        {
            _first = number;
            Clear(number);
        }
        else
        {
            for (long next = Math.Max(_open + 1, number - kept + 1); next <= number; next++) Clear(next);
        }
        _open = number;
    }

    /// <summary>Whether one is kept; if so, it is about to be changed.</summary>
    public bool TryUse(long number, out int place)
    {
        place = PlaceOf(number);
        if (IsEmpty || number > _open || number < First) return false;
        _dirty.Mark(place);
        return true;
    }

    /// <summary>The sums at a place.</summary>
    public ref CohortSums At(int place) => ref _sums[place];

    /// <summary>The sums of one that is kept.</summary>
    public ref readonly CohortSums this[long number] => ref _sums[PlaceOf(number)];

    public void Save(StateBlocks changes)
    {
        for (; _obsoleteBlocks > _dirty.Count; _obsoleteBlocks--) changes.Remove(part, _obsoleteBlocks - 1);
        ReadOnlySpan<long> head = [_sums.Length, First, _open];
        changes.Put(part, -1, MemoryMarshal.AsBytes(head));
        foreach (var (number, range) in _dirty.Take()) changes.Put(part, number, MemoryMarshal.AsBytes(_sums.AsSpan(range)));
    }

    /// <summary>Takes up what was saved; where more were kept, as many as fit.</summary>
    /// <param name="state">The state.</param>
    /// <param name="dropped">Is given those that do not fit.</param>
    public void Load(StateBlocks state, Action<long, CohortSums>? dropped)
    {
        if (state.Find(part, -1) is not { } head) return;
        var numbers = MemoryMarshal.Cast<byte, long>(head);
        (long length, long first, long open) = (numbers[0], numbers[1], numbers[2]);
        var saved = new CohortSums[length];
        foreach (var (number, bytes) in state.Read(part))
        {
            if (number < 0) continue;
            if (number * PerBlock >= length) throw new InvalidStateException($"block {number} of {part} lies outside of its ring");
            MemoryMarshal.Cast<byte, CohortSums>(bytes).CopyTo(saved.AsSpan((int)number * PerBlock));
            _obsoleteBlocks = (int)number + 1;
        }
        if (open == long.MinValue) return;
        _open = open;
        _first = Math.Max(first, open - Math.Min(length, kept) + 1);
        for (long number = first; number < _first; number++) dropped?.Invoke(number, saved[number & (length - 1)]);
        for (long number = _first; number <= open; number++) _sums[PlaceOf(number)] = saved[number & (length - 1)];
        if (length != _sums.Length) _dirty.MarkAll();
    }

    private void Clear(long number)
    {
        int place = PlaceOf(number);
        _sums[place] = default;
        _dirty.Mark(place);
    }

    private int PlaceOf(long number) => (int)number & (_sums.Length - 1);

    private static int RoomFor(int count) => (int)BitOperations.RoundUpToPowerOf2((uint)count);
}
