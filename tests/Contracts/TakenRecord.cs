using System.Text;
using StreamLogit.Engine.Records;
using StreamLogit.Pipeline;

namespace StreamLogit.Tests.Contracts;

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

    /// <summary>Reads a source to its end, however often it is idle on the way: a minute at the most.</summary>
    public static async Task<List<TakenRecord>> TakeToEndAsync(IRecordSource source, int batchSize = 64)
    {
        var taken = new List<TakenRecord>();
        var batch = Schemas.NewBatch();
        while (await FillAsync(source, batch, batchSize) == FillOutcome.Filled)
        {
            Assert.InRange(batch.Count, 1, batchSize);
            taken.AddRange(Of(batch));
        }
        Assert.Equal(0, batch.Count);
        return taken;
    }

    /// <summary>Fills a batch anew, however often the source is idle before it has something, or ends: a minute at the most.</summary>
    public static async Task<FillOutcome> FillAsync(IRecordSource source, RecordBatch batch, int batchSize)
    {
        long began = TimeProvider.System.GetTimestamp();
        while (true)
        {
            batch.Clear();
            var outcome = await source.FillAsync(batch, batchSize, CancellationToken.None);
            if (outcome != FillOutcome.Idle) return outcome;
            Assert.True(TimeProvider.System.GetElapsedTime(began) < TimeSpan.FromMinutes(1), "The source stayed idle for a minute.");
        }
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
