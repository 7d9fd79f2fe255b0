using System.Runtime.InteropServices;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Health;

/// <summary>Sums per minute of the stream's clock, as many minutes back as the longest window.</summary>
internal sealed class MinuteRing(int minutes)
{
    private const string Part = "health/minutes";
    private const long MicrosecondsPerMinute = 60_000_000;
    private readonly Bucket[] _buckets = new Bucket[minutes];
    private readonly DirtyBlocks _dirty = new(minutes, slotsPerBlock: 64);

    /// <returns>The minute.</returns>
    public int Add(long clockMicroseconds, in LabelSums sums)
    {
        int minute = MinuteOf(clockMicroseconds);
        int place = PlaceOf(minute);
        ref var bucket = ref _buckets[place];
        if (bucket.Minute != minute || bucket.Sums.Count == 0) bucket = new Bucket { Minute = minute };
        bucket.Sums.Add(sums);
        _dirty.Mark(place);
        return minute;
    }

    /// <summary>Puts other sums in the place of some that were added in a minute, if that is still here.</summary>
    public void Replace(int minute, in LabelSums old, in LabelSums replacement)
    {
        int place = PlaceOf(minute);
        ref var bucket = ref _buckets[place];
        if (bucket.Minute != minute || bucket.Sums.Count == 0) return;
        bucket.Sums.Subtract(old);
        bucket.Sums.Add(replacement);
        _dirty.Mark(place);
    }

    /// <summary>The sums of the window that ends with the clock's minute, which counts as a whole one.</summary>
    public LabelSums Window(long clockMicroseconds, long lengthMicroseconds)
    {
        var sums = new LabelSums();
        long last = MinuteOf(clockMicroseconds);
        for (long minute = last - lengthMicroseconds / MicrosecondsPerMinute + 1; minute <= last; minute++)
        {
            ref readonly var bucket = ref _buckets[PlaceOf(minute)];
            if (bucket.Minute == minute) sums.Add(bucket.Sums);
        }
        return sums;
    }

    public void Save(StateBlocks changes)
    {
        foreach (var (number, range) in _dirty.Take())
            changes.Put(Part, number, MemoryMarshal.AsBytes(_buckets.AsSpan(range)));
    }

    /// <summary>Takes up the buckets one by one: the ring may have had another length when they were saved.</summary>
    public void Load(StateBlocks state)
    {
        foreach (var (_, bytes) in state.Read(Part))
            foreach (ref readonly var saved in MemoryMarshal.Cast<byte, Bucket>(bytes))
            {
                ref var bucket = ref _buckets[PlaceOf(saved.Minute)];
                if (saved.Sums.Count > 0 && (bucket.Sums.Count == 0 || bucket.Minute < saved.Minute)) bucket = saved;
            }
        _dirty.MarkAll();
    }

    // The years 1 to 9999 fit into an int.
    private static int MinuteOf(long clockMicroseconds)
    {
        int minute = (int)(clockMicroseconds / MicrosecondsPerMinute);
        return clockMicroseconds % MicrosecondsPerMinute < 0 ? minute - 1 : minute;
    }

    private int PlaceOf(long minute)
    {
        int place = (int)(minute % _buckets.Length);
        return place < 0 ? place + _buckets.Length : place;
    }

    private struct Bucket
    {
        public long Minute;
        public LabelSums Sums;
    }
}
