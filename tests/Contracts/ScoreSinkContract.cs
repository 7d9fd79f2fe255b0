using StreamLogit.Pipeline;

namespace StreamLogit.Tests.Contracts;

/// <summary>What every sink must do.</summary>
public abstract class ScoreSinkContract : IDisposable
{
    private protected TemporaryFolder Folder { get; } = new();

    /// <summary>A batch that begins at a multiple of this is followed by a flush.</summary>
    private protected virtual int FlushEvery => 5;

    private protected abstract IScoreSink Open();

    /// <summary>All that a sink took until its last flush.</summary>
    private protected abstract string Written(IScoreSink sink);

    /// <summary>Makes room for another sink in the place of the last.</summary>
    private protected abstract void Clear();

    [Fact]
    public void Flush_NothingWritten_IsZero()
    {
        using var sink = Open();
        sink.Start(null);

        Assert.Equal(0, sink.Flush());
    }

    [Theory]
    [InlineData(1)]
    [InlineData(7)]
    [InlineData(10_000)]
    public void Write_BatchesCutOtherwise_GivesTheSame(int batchSize)
    {
        const int Records = 10_000;
        using var whole = Open();
        whole.Start(null);
        ScoredBatch.Create(1, Records).WriteTo(whole);
        long mark = whole.Flush();
        string written = Written(whole);
        whole.Dispose();
        Clear();

        using var parts = Open();
        parts.Start(null);
        for (int i = 1; i <= Records; i += batchSize)
        {
            ScoredBatch.Create(i, Math.Min(batchSize, Records + 1 - i)).WriteTo(parts);
            if (i % FlushEvery == 0) parts.Flush();
        }

        Assert.Equal(mark, parts.Flush());
        Assert.Equal(written, Written(parts));
    }

    public void Dispose()
    {
        Folder.Dispose();
        GC.SuppressFinalize(this);
    }
}
