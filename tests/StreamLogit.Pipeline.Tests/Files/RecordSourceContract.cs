namespace StreamLogit.Pipeline.Tests.Files;

/// <summary>What every source of records must do.</summary>
public abstract class RecordSourceContract : IDisposable
{
    // Enough to be read in several pieces.
    private const int Records = 4000;

    private protected TemporaryFolder Folder { get; } = new();

    /// <summary>Puts the recordings there, and returns what a source must give of them.</summary>
    private protected abstract List<TakenRecord> Arrange(int records);

    /// <summary>Opens what was arranged.</summary>
    private protected abstract IRecordSource Open();

    /// <summary>The file that the last records stand in.</summary>
    private protected abstract string LastFile { get; }

    /// <summary>Takes the last byte, or the last record, off the last file.</summary>
    private protected virtual void Shorten()
    {
        using var file = OpenLastFile();
        file.SetLength(file.Length - 1);
    }

    /// <summary>Puts other content of the same length in place of the last file's.</summary>
    private protected virtual void Alter()
    {
        using var file = OpenLastFile();
        file.Position = file.Length - 100;
        file.WriteByte((byte)'#');
    }

    private FileStream OpenLastFile() => new(LastFile, FileMode.Open, FileAccess.Write, FileShare.ReadWrite);

    private protected static string Record(int i) => $$"""{"id":"t-{{i}}","note":"{{new string((char)('a' + i % 26), i * 7919 % 301)}}"}""";

    [Theory]
    [InlineData(1)]
    [InlineData(7)]
    [InlineData(1_000_000)]
    public async Task Fill_AnyBatchSize_GivesAllRecordsInOrder(int batchSize)
    {
        var expected = Arrange(Records);
        using var source = Open();

        Assert.Equal(expected, await TakenRecord.TakeAllAsync(source, batchSize));
    }

    [Fact]
    public async Task Fill_AtTheEnd_StaysEnded()
    {
        Arrange(3);
        using var source = Open();
        await TakenRecord.TakeAllAsync(source);

        Assert.Equal(FillOutcome.Ended, await source.FillAsync(Schemas.NewBatch(), 1, CancellationToken.None));
        Assert.Equal(FillOutcome.Ended, await source.FillAsync(Schemas.NewBatch(), 1, CancellationToken.None));
    }

    [Fact]
    public async Task Fill_Cancelled_GivesNothingAndGoesOnLater()
    {
        var expected = Arrange(3);
        using var source = Open();
        var batch = Schemas.NewBatch();

        Assert.Equal(FillOutcome.Idle, await source.FillAsync(batch, 10, new CancellationToken(canceled: true)));
        Assert.Equal(0, batch.Count);
        Assert.Equal(expected, await TakenRecord.TakeAllAsync(source));
    }

    [Fact]
    public async Task Seek_PositionAfterAnyRecord_GivesTheRest()
    {
        var expected = Arrange(40);
        using var first = Open();
        var batch = Schemas.NewBatch();
        for (int taken = 0; taken <= expected.Count; taken++)
        {
            using var second = Open();
            second.Seek(first.Position);

            Assert.Equal(expected[taken..], await TakenRecord.TakeAllAsync(second));
            batch.Clear();
            await first.FillAsync(batch, 1, CancellationToken.None);
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
            batch.Clear();
            await first.FillAsync(batch, 333, CancellationToken.None);
            taken += batch.Count;
        }
        using var second = Open();
        second.Seek(first.Position);

        Assert.Equal(expected[taken..], await TakenRecord.TakeAllAsync(second, 100));
        Assert.Equal(expected[taken..], await TakenRecord.TakeAllAsync(first, 100));
        Assert.Equal(first.Position.Origins, second.Position.Origins);
    }

    [Fact]
    public async Task Seek_FileCutBelowThePosition_Throws()
    {
        Arrange(Records);
        using var first = Open();
        await TakenRecord.TakeAllAsync(first);
        Shorten();
        using var second = Open();

        var error = Assert.Throws<PipelineException>(() => second.Seek(first.Position));
        Assert.Contains("has fewer than the", error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Seek_AnotherFileOfThatName_Throws()
    {
        Arrange(Records);
        using var first = Open();
        await TakenRecord.TakeAllAsync(first);
        Alter();
        using var second = Open();

        var error = Assert.Throws<PipelineException>(() => second.Seek(first.Position));
        Assert.Contains("is another file", error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Progress_AtTheEnd_IsAllBytes()
    {
        Arrange(Records);
        using var source = Open();
        Assert.Equal(0, source.Progress.Bytes);
        await TakenRecord.TakeAllAsync(source);

        Assert.True(source.Progress.Bytes > 0);
        Assert.Equal(source.Progress.TotalBytes, source.Progress.Bytes);
    }

    public void Dispose()
    {
        Folder.Dispose();
        GC.SuppressFinalize(this);
    }
}
