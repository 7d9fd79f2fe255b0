using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Features.Histories;

/// <summary>
/// Decayed mean and variance of a key's values, updated with each (West, Communications of the ACM 22, 1979, 532, with weights that halve with time).
/// </summary>
internal sealed class ValueMoments(int valueField, long halfLifeMicroseconds) : Accumulator(halfLifeMicroseconds)
{
    public override int DecayedWords => 2;

    public override int SteadyWords => 1;

    public override (int Field, int Size) Identity => (valueField, 0);

    /// <summary>The decayed number of values.</summary>
    public double Weight(Span<double> row) => row[Decayed];

    public double Mean(Span<double> row) => row[Steady];

    /// <summary>The weighted mean of the squared differences from the mean. Not for a key without values.</summary>
    public double Variance(Span<double> row) => row[Decayed + 1] / row[Decayed];

    public override void Add(Span<double> row, RecordBatch records, int record, double weight)
    {
        ref var value = ref records.Fields(record)[valueField];
        if (!value.IsPresent) return;
        double total = row[Decayed] + weight;
        if (!(total > 0)) return; // so late, or after so long, that nothing of it is left
        double difference = value.Number - row[Steady];
        double move = difference * weight / total;
        row[Decayed] = total;
        row[Steady] += move;
        row[Decayed + 1] += weight * difference * (value.Number - row[Steady]);
    }
}
