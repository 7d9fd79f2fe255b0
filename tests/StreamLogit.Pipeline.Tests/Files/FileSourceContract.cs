namespace StreamLogit.Pipeline.Tests.Files;

/// <summary>What every source that reads files must do.</summary>
public abstract class FileSourceContract : RecordSourceContract
{
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
}
