using StreamLogit.Engine.Features;
using StreamLogit.Engine.Learning;

namespace StreamLogit.Engine;

/// <summary>
/// Looks for the largest of the coefficients that published scores are made of, some slots at a time, so that no event waits long for it. The coefficients that it finds
/// are therefore from slightly different moments. Belongs to one engine.
/// </summary>
/// <param name="most">How many coefficients are kept, 1 or more.</param>
public sealed class CoefficientScan(int most)
{
    private const int RunLength = 256;

    private readonly int[] _slots = new int[RunLength];
    private readonly double[] _ones = [.. Enumerable.Repeat(1.0, RunLength)];
    private readonly double[] _values = new double[RunLength];
    private readonly PriorityQueue<(int Slot, double Value), double> _largest = new(most + 1); // the smallest of them first
    private int _next;
    private long _used;

    /// <summary>Goes on through so many slots.</summary>
    /// <returns>Whether it has come to the end.</returns>
    internal bool Continue(FeatureEncoder encoder, Bank bank, int slots)
    {
        int end = (int)Math.Min(_next + (long)slots, encoder.SlotCount);
        while (_next < end)
        {
            int count = 0;
            for (; _next < end && count < RunLength; _next++)
                if (encoder.IsUsed(_next)) _slots[count++] = _next;
            _used += count;
            bank.PublishedCoefficients(new EncodedVector(_slots.AsSpan(0, count), _ones.AsSpan(0, count)), _values);
            for (int i = 0; i < count; i++) Keep(_slots[i], _values[i]);
        }
        return _next == encoder.SlotCount;
    }

    /// <summary>What it found; it begins again.</summary>
    internal LargestCoefficients Take(FeatureEncoder encoder, long version, long? clockMicroseconds, double intercept)
    {
        var found = new LargestCoefficients(
            version, clockMicroseconds, intercept, _used,
            [.. _largest.UnorderedItems.Select(item => item.Element).OrderByDescending(c => Math.Abs(c.Value)).ThenBy(c => c.Slot)
                .Select(c => new NamedCoefficient(encoder.NameOf(c.Slot), c.Value))]);
        _largest.Clear();
        _next = 0;
        _used = 0;
        return found;
    }

    private void Keep(int slot, double value)
    {
        double magnitude = Math.Abs(value);
        if (magnitude == 0) return;
        if (_largest.Count < most) _largest.Enqueue((slot, value), magnitude);
        else if (_largest.TryPeek(out _, out double smallest) && magnitude > smallest) _largest.EnqueueDequeue((slot, value), magnitude);
    }
}
