using StreamLogit.Pipeline;

namespace StreamLogit.Tests.Contracts;

/// <summary>What every source of records must do.</summary>
public abstract class RecordSourceContract : IDisposable
{
    // Enough to be read in several pieces.
    private protected const int Records = 4000;

    /// <summary>How many positions are tried, each with a source of its own.</summary>
    private protected virtual int Seeks => 40;

    private protected TemporaryFolder Folder { get; } = new();

    /// <summary>Puts the recordings there, and returns what a source must give of them.</summary>
    private protected abstract List<TakenRecord> Arrange(int records);

    /// <summary>Opens what was arranged.</summary>
    private protected abstract IRecordSource Open();

    private protected static string Record(int i) => $$"""{"id":"t-{{i}}","note":"{{new string((char)('a' + i % 26), i * 7919 % 301)}}"}""";

    [Theory]
    [InlineData(1)]
    [InlineData(7)]
    [InlineData(1_000_000)]
    public async Task Fill_AnyBatchSize_GivesAllRecordsInOrder(int batchSize)
    {
        var expected = Arrange(Records);
        using var source = Open();

        Assert.Equal(expected, await TakenRecord.TakeToEndAsync(source, batchSize));
    }

    [Fact]
    public async Task Fill_AtTheEnd_StaysEnded()
    {
        Arrange(3);
        using var source = Open();
        await TakenRecord.TakeToEndAsync(source);

        Assert.Equal(FillOutcome.Ended, await TakenRecord.FillAsync(source, Schemas.NewBatch(), 1));
        Assert.Equal(FillOutcome.Ended, await TakenRecord.FillAsync(source, Schemas.NewBatch(), 1));
    }

    [Fact]
    public async Task Fill_Cancelled_GivesNothingAndGoesOnLater()
    {
        var expected = Arrange(3);
        using var source = Open();
        var batch = Schemas.NewBatch();

        Assert.Equal(FillOutcome.Idle, await source.FillAsync(batch, 10, new CancellationToken(canceled: true)));
        Assert.Equal(0, batch.Count);
        Assert.Equal(expected, await TakenRecord.TakeToEndAsync(source));
    }

    [Fact]
    public async Task Seek_PositionAfterAnyRecord_GivesTheRest()
    {
        var expected = Arrange(Seeks);
        using var first = Open();
        var batch = Schemas.NewBatch();
        for (int taken = 0; taken <= expected.Count; taken++)
        {
            using var second = Open();
            second.Seek(first.Position);

            Assert.Equal(expected[taken..], await TakenRecord.TakeToEndAsync(second));
            await TakenRecord.FillAsync(first, batch, 1);
        }
    }

    [Fact]
    public async Task Seek_PositionOfALateRecord_GivesTheRest()
    {
        var expected = Arrange(Records);
        using var first = Open();
        var batch = Schemas.NewBatch();
        int taken = 0;
        while (taken < Records - 500)
        {
            await TakenRecord.FillAsync(first, batch, 333);
            taken += batch.Count;
        }
        using var second = Open();
        second.Seek(first.Position);

        Assert.Equal(expected[taken..], await TakenRecord.TakeToEndAsync(second, 100));
        Assert.Equal(expected[taken..], await TakenRecord.TakeToEndAsync(first, 100));
        Assert.Equal(first.Position.Origins, second.Position.Origins);
    }

    public void Dispose()
    {
        Folder.Dispose();
        GC.SuppressFinalize(this);
    }
}
