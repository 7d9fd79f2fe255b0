namespace StreamLogit.Pipeline.Tests.Files;

/// <summary>What every sink that writes a file must do.</summary>
public abstract class FileSinkContract : ScoreSinkContract
{
    private protected string OutPath => Folder["out/quay.jsonl"];

    private protected abstract IScoreSink Open(string path);

    private protected override IScoreSink Open() => Open(OutPath);

    private protected override string Written(IScoreSink sink) => File.ReadAllText(OutPath);

    private protected override void Clear() => File.Delete(OutPath);

    [Fact]
    public void Start_AtAMark_TakesBackWhatWasWrittenAfterIt()
    {
        long mark;
        using (var first = Open())
        {
            first.Start(null);
            ScoredBatch.Create(1, 30).WriteTo(first);
            mark = first.Flush();
            ScoredBatch.Create(31, 60).WriteTo(first);
        }
        string all = File.ReadAllText(OutPath);
        Assert.True(all.Length > mark);

        using var second = Open();
        second.Start(mark);
        Assert.Equal(mark, new FileInfo(OutPath).Length);
        ScoredBatch.Create(31, 60).WriteTo(second);

        Assert.Equal(all.Length, second.Flush());
        Assert.Equal(all, File.ReadAllText(OutPath));
    }

    [Fact]
    public void Write_WithoutFlush_IsSeenByWhoeverFollowsTheFile()
    {
        using var sink = Open();
        sink.Start(null);
        ScoredBatch.Create(1, 3).WriteTo(sink);

        Assert.EndsWith("}\n", File.ReadAllText(OutPath), StringComparison.Ordinal);
    }

    [Fact]
    public void Start_FileShorterThanTheMark_Throws()
    {
        Directory.CreateDirectory(Folder["out"]);
        File.WriteAllText(OutPath, "12345");
        using var sink = Open();

        var error = Assert.Throws<PipelineException>(() => sink.Start(6));
        Assert.StartsWith($"{OutPath} holds 5 bytes, but 6 were committed", error.Message, StringComparison.Ordinal);
        Assert.Equal("12345", File.ReadAllText(OutPath));
    }

    [Fact]
    public void Start_FileThatNobodyCommitted_ThrowsAndLeavesIt()
    {
        Directory.CreateDirectory(Folder["out"]);
        File.WriteAllText(OutPath, "12345");
        using var sink = Open();

        var error = Assert.Throws<PipelineException>(() => sink.Start(null));
        Assert.StartsWith($"{OutPath} already holds 5 bytes", error.Message, StringComparison.Ordinal);
        Assert.Equal("12345", File.ReadAllText(OutPath));
    }

    [Fact]
    public void Start_PathIsAFolder_Throws()
    {
        using var sink = Open(Folder.Path);

        Assert.Throws<PipelineException>(() => sink.Start(null));
    }

    [Fact]
    public void Write_FullDisk_SaysSo()
    {
        Assert.SkipUnless(File.Exists("/dev/full"), "There is no /dev/full here.");
        using var sink = Open("/dev/full");
        sink.Start(null);

        var error = Assert.Throws<PipelineException>(() => ScoredBatch.Create(1, 3).WriteTo(sink));
        Assert.StartsWith("There is no room left on the disk for /dev/full.", error.Message, StringComparison.Ordinal);
    }
}
