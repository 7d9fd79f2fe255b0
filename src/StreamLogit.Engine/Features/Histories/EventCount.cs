using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Features.Histories;

/// <summary>The decayed number of events of a key.</summary>
internal sealed class EventCount(long halfLifeMicroseconds) : Accumulator(halfLifeMicroseconds)
{
    public override int DecayedWords => 1;

    public double Of(Span<double> row) => row[Decayed];

    public override void Add(Span<double> row, RecordBatch records, int record, double weight) => row[Decayed] += weight;
}
