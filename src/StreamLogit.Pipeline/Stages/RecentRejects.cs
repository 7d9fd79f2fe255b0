using System.Collections.Immutable;
using System.Runtime.InteropServices;
using System.Text;
using StreamLogit.Engine.Records;

namespace StreamLogit.Pipeline.Stages;

/// <summary>Keeps the latest rejects of every reason, a few of each, and of a batch one of each at most, so that a flood of them costs little.</summary>
internal sealed class RecentRejects
{
    private const int PerReason = 3;
    private const int MostBytes = 400;

    private volatile RejectExample[] _examples = []; // never changed, only replaced

    /// <summary>By reason, the latest first. Any thread may ask.</summary>
    public ImmutableArray<RejectExample> Examples => ImmutableCollectionsMarshal.AsImmutableArray(_examples);

    /// <summary>Takes note of the rejects of a batch.</summary>
    public void Add(RecordBatch records)
    {
        long seen = 0;
        for (int i = records.Rejects.Count - 1; i >= 0; i--)
        {
            int index = records.Rejects[i];
            long bit = 1L << (int)records.Record(index).Reason;
            if ((seen & bit) != 0) continue;
            seen |= bit;
            Add(ExampleOf(records, index));
        }
    }

    private static RejectExample ExampleOf(RecordBatch records, int index)
    {
        ref readonly var record = ref records.Record(index);
        var bytes = records.RecordBytes(index);
        string text = Encoding.UTF8.GetString(bytes[..Math.Min(bytes.Length, MostBytes)]);
        return new RejectExample(
            record.Reason.Code(), FormattableString.Invariant($"{records.OriginOf(index)}:{record.Position}"), record.Detail, bytes.Length > MostBytes ? text + " …" : text);
    }

    private void Add(RejectExample example)
    {
        var others = _examples.Where(known => known.Reason != example.Reason);
        var same = _examples.Where(known => known.Reason == example.Reason).Take(PerReason - 1);
        _examples = [.. others.Concat(same.Prepend(example)).OrderBy(known => known.Reason, StringComparer.Ordinal)];
    }
}
