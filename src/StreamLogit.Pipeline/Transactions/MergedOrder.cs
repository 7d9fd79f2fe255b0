using StreamLogit.Engine.Records;

namespace StreamLogit.Pipeline.Transactions;

/// <summary>Writes down the merged order of the records of a transaction as they pass.</summary>
internal sealed class MergedOrder
{
    private readonly List<(string Origin, long From, long To)> _spans = [];
    private readonly List<OrderRun> _order = [];

    /// <summary>Takes note of a batch.</summary>
    public void Add(RecordBatch records)
    {
        int at = 0;
        while (at < records.Count)
        {
            string origin = records.OriginOf(at);
            int end = at + 1;
            // Origins come in runs, and as the same object.
            while (end < records.Count && (ReferenceEquals(records.OriginOf(end), origin) || records.OriginOf(end) == origin)) end++;
            Add(origin, records.Record(at).Position, records.Record(end - 1).Position, end - at);
            at = end;
        }
    }

    /// <summary>Hands over what was noted, and begins anew.</summary>
    public JournalEntry Take()
    {
        var entry = new JournalEntry([.. _spans.Select(span => new OriginSpan(span.Origin, span.From, span.To))], [.. _order]);
        _spans.Clear();
        _order.Clear();
        return entry;
    }

    private void Add(string origin, long first, long last, int count)
    {
        int span = 0;
        while (span < _spans.Count && _spans[span].Origin != origin) span++;
        if (span == _spans.Count) _spans.Add((origin, first, first));
        _spans[span] = _spans[span] with { To = last + 1 };
        if (_order.Count > 0 && _order[^1].Span == span) _order[^1] = _order[^1] with { Count = _order[^1].Count + count };
        else _order.Add(new OrderRun(span, count));
    }
}
