using System.Collections.Immutable;
using System.Text;

namespace StreamLogit.Pipeline.Transactions;

/// <summary>The records of one transaction in the order in which the engine took them.</summary>
/// <param name="Spans">What was taken of each origin.</param>
/// <param name="Order">The merged order.</param>
public sealed record JournalEntry(ImmutableArray<OriginSpan> Spans, ImmutableArray<OrderRun> Order)
{
    /// <summary>The entry as bytes: a few for each span and run.</summary>
    public byte[] ToBytes()
    {
        using var bytes = new MemoryStream();
        using var writer = new BinaryWriter(bytes, Encoding.UTF8);
        writer.Write7BitEncodedInt(Spans.Length);
        foreach (var span in Spans)
        {
            writer.Write(span.Origin);
            writer.Write7BitEncodedInt64(span.From);
            writer.Write7BitEncodedInt64(span.To - span.From);
        }
        writer.Write7BitEncodedInt(Order.Length);
        foreach (var run in Order)
        {
            writer.Write7BitEncodedInt(run.Span);
            writer.Write7BitEncodedInt(run.Count);
        }
        writer.Flush();
        return bytes.ToArray();
    }

    /// <summary>Reads what <see cref="ToBytes"/> gave.</summary>
    public static JournalEntry FromBytes(byte[] bytes)
    {
        using var reader = new BinaryReader(new MemoryStream(bytes), Encoding.UTF8);
        var spans = ImmutableArray.CreateBuilder<OriginSpan>();
        for (int left = reader.Read7BitEncodedInt(); left > 0; left--)
        {
            string origin = reader.ReadString();
            long from = reader.Read7BitEncodedInt64();
            spans.Add(new OriginSpan(origin, from, from + reader.Read7BitEncodedInt64()));
        }
        var order = ImmutableArray.CreateBuilder<OrderRun>();
        for (int left = reader.Read7BitEncodedInt(); left > 0; left--) order.Add(new OrderRun(reader.Read7BitEncodedInt(), reader.Read7BitEncodedInt()));
        return new JournalEntry(spans.ToImmutable(), order.ToImmutable());
    }
}
