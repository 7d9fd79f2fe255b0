using System.Text;
using StreamLogit.Engine.Records;

namespace StreamLogit.Pipeline.Tests.Files;

/// <summary>What a source gave as one record.</summary>
internal sealed record TakenRecord(string Text, long Number, RejectReason Reason = RejectReason.None, string? Detail = null)
{
    /// <summary>Reads a source to its end, or until it is idle, in batches of a size.</summary>
    public static async Task<List<TakenRecord>> TakeAllAsync(IRecordSource source, int batchSize = 64)
    {
        var taken = new List<TakenRecord>();
        var batch = Schemas.NewBatch();
        while (await source.FillAsync(batch, batchSize, CancellationToken.None) == FillOutcome.Filled)
        {
            Assert.InRange(batch.Count, 1, batchSize);
            taken.AddRange(Of(batch));
            batch.Clear();
        }
        Assert.Equal(0, batch.Count);
        return taken;
    }

    public static IEnumerable<TakenRecord> Of(RecordBatch batch)
    {
        for (int i = 0; i < batch.Count; i++)
        {
            var record = batch.Records[i];
            yield return new TakenRecord(Encoding.Latin1.GetString(batch.RecordBytes(i)), record.Position, record.Reason, record.Detail);
        }
    }
}
