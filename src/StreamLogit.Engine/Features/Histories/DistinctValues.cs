using System.Runtime.InteropServices;
using StreamLogit.Engine.Numerics;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Features.Histories;

/// <summary>
/// The decayed number of different values of a field: the sum, over the values, of 2^-(time since the value was last seen / half-life).
/// Exact, but for times cut to 1/1024 of a half-life, while fewer than <c>size</c> values are at hand; beyond, an estimate without bias whose
/// standard error is at most 1 / sqrt(size - 2) of it.
/// </summary>
/// <remarks>
/// A bottom-k sketch with exponential ranks (Cohen and Kaplan, Summarizing data using bottom-k sketches, PODC 2007): a value with hash h, as a number
/// u between 0 and 1, and weight w has the rank -ln u / w, and the values with the smallest ranks are kept. With t the largest rank kept, each of the others
/// stands for w / (1 - e^(-w t)). All weights halve together, so ranks keep their order as time passes, and the estimate halves with the weights.
/// </remarks>
internal sealed class DistinctValues(int valueField, int size, long halfLifeMicroseconds) : Accumulator(halfLifeMicroseconds)
{
    // A value unseen for longer weighs less than 2^-64 and is taken for gone, long before its 32-bit time could wrap around.
    private const double LongestHalfLives = 64;

    private readonly double[] _weights = new double[size];
    private readonly double[] _ranks = new double[size];
    private readonly long _tickMicroseconds = Math.Max(1, halfLifeMicroseconds / 1024);

    public override int DecayedWords => 1;

    public override int SteadyWords => size;

    public override (int Field, int Size) Identity => (valueField, size);

    public double Estimate(Span<double> row) => row[Decayed];

    public override void Advance(Span<double> row, double halfLives)
    {
        if (halfLives <= LongestHalfLives) return;
        row[Decayed] = 0;
        row.Slice(Steady, size).Clear();
    }

    public override void Add(Span<double> row, RecordBatch records, int record, double weight)
    {
        var values = MemoryMarshal.Cast<double, SeenValue>(row.Slice(Steady, size));
        uint now = Tick(RowPool.ClockOf(row));
        bool isRecounted = DropOldest(values, now);
        ref var value = ref records.Fields(record)[valueField];
        uint seen = Tick(records.Records[record].TimeMicroseconds);
        if (value.IsPresent && !IsOld(seen, now))
        {
            See(row, values, new SeenValue { Hash = Math.Max(1, (uint)(value.Hash >> 32)), Tick = seen }, now);
            isRecounted |= IsFull(values);
        }
        if (isRecounted) row[Decayed] = Recount(values, now);
    }

    private static bool IsFull(Span<SeenValue> values) => values[^1].Hash != 0;

    private void See(Span<double> row, Span<SeenValue> values, SeenValue seen, uint now)
    {
        int place = 0;
        while (place < values.Length && values[place].Hash != 0 && values[place].Hash != seen.Hash) place++;
        if (place == values.Length)
        {
            ReplaceLargestRank(values, seen, now);
            return;
        }
        double before = 0;
        if (values[place].Hash != 0)
        {
            if ((int)(seen.Tick - values[place].Tick) <= 0) return;
            before = WeightOf(values[place], now);
        }
        values[place] = seen;
        row[Decayed] += WeightOf(seen, now) - before;
    }

    private void ReplaceLargestRank(Span<SeenValue> values, SeenValue seen, uint now)
    {
        int largest = 0;
        for (int i = 1; i < values.Length; i++)
            if (RankOf(values[i], now) > RankOf(values[largest], now)) largest = i;
        if (RankOf(seen, now) < RankOf(values[largest], now)) values[largest] = seen;
    }

    private double Recount(Span<SeenValue> values, uint now)
    {
        double sum = 0;
        if (!IsFull(values))
        {
            for (int i = 0; i < values.Length && values[i].Hash != 0; i++) sum += WeightOf(values[i], now);
            return sum;
        }
        int largest = 0;
        for (int i = 0; i < values.Length; i++)
        {
            _weights[i] = WeightOf(values[i], now);
            _ranks[i] = RankOf(values[i], now);
            if (_ranks[i] > _ranks[largest]) largest = i;
        }
        for (int i = 0; i < values.Length; i++)
        {
            if (i == largest) continue;
            double x = _weights[i] * _ranks[largest];
            sum += _weights[i] / (x < 1e-5 ? x * (1 - 0.5 * x) : 1 - Elementary.Exp(-x));
        }
        return sum;
    }

    /// <summary>Closes the gaps that values leave that are gone.</summary>
    private bool DropOldest(Span<SeenValue> values, uint now)
    {
        int kept = 0, found = 0;
        for (; found < values.Length && values[found].Hash != 0; found++)
            if (!IsOld(values[found].Tick, now)) values[kept++] = values[found];
        values[kept..found].Clear();
        return kept < found;
    }

    private uint Tick(long timeMicroseconds) => (uint)(timeMicroseconds / _tickMicroseconds);

    private bool IsOld(uint tick, uint now) => HalfLivesSince(tick, now) > LongestHalfLives;

    private double HalfLivesSince(uint tick, uint now) => (double)(int)(now - tick) * _tickMicroseconds / HalfLifeMicroseconds;

    private double WeightOf(SeenValue value, uint now) => Decay.Over(HalfLivesSince(value.Tick, now), 1);

    private double RankOf(SeenValue value, uint now) => -Elementary.Log((value.Hash - 0.5) / 4294967296.0) / WeightOf(value, now);

    private struct SeenValue
    {
        public uint Hash; // 0 where there is none; those that are there stand before
        public uint Tick;
    }
}
