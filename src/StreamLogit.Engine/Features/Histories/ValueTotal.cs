using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Features.Histories;

/// <summary>The decayed number of events of a key that have a value, and the decayed sum of their values.</summary>
internal sealed class ValueTotal(int valueField, long halfLifeMicroseconds) : Accumulator(halfLifeMicroseconds)
{
    public override int DecayedWords => 2;

    public override (int Field, int Size) Identity => (valueField, 0);

    public double Weight(Span<double> row) => row[Decayed];

    public double Sum(Span<double> row) => row[Decayed + 1];

    public override void Add(Span<double> row, RecordBatch records, int record, double weight)
    {
        ref var value = ref records.Fields(record)[valueField];
        if (!value.IsPresent) return;
        row[Decayed] += weight;
        row[Decayed + 1] += weight * value.Number;
    }
}
