using System.Text;
using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Tests.Files;

public sealed class FollowTests : IDisposable
{
    private readonly TemporaryFolder _folder = new();
    private readonly JumpingTime _time = new();

    public void Dispose() => _folder.Dispose();

    private FileSource Open(string name, RecordingFormat format = RecordingFormat.JsonLines) =>
        FileSource.Open(new FileSourceOptions(_folder[name], format, Follow: true), 1000, _time);

    private void Append(string name, string text)
    {
        using var file = new FileStream(_folder[name], FileMode.Append, FileAccess.Write, FileShare.ReadWrite);
        file.Write(Encoding.UTF8.GetBytes(text));
    }

    [Fact]
    public async Task Fill_GrowingFile_GivesLinesWhenTheyAreWhole()
    {
        _folder.Write("quay.jsonl", "{\"a\":1}\n{\"a\"");
        using var source = Open("quay.jsonl");

        Assert.Equal([new TakenRecord("{\"a\":1}", 1)], await TakenRecord.TakeAllAsync(source));
        var afterFirst = source.Position;
        Append("quay.jsonl", ":2}");
        Assert.Empty(await TakenRecord.TakeAllAsync(source));
        Assert.Equal(afterFirst.Origins, source.Position.Origins);
        Append("quay.jsonl", "\r\n\n");
        Assert.Equal([new TakenRecord("{\"a\":2}", 2)], await TakenRecord.TakeAllAsync(source));
        Append("quay.jsonl", "{\"a\":3}\n");
        Assert.Equal([new TakenRecord("", 3), new TakenRecord("{\"a\":3}", 4)], await TakenRecord.TakeAllAsync(source));
        Assert.True(_time.Elapsed > TimeSpan.Zero);
    }

    [Fact]
    public async Task Fill_GrowingCsv_GivesRowsWhenTheyAreWhole()
    {
        _folder.Write("quay.csv", "id,no");
        using var source = Open("quay.csv", RecordingFormat.Csv);

        Assert.Empty(await TakenRecord.TakeAllAsync(source));
        Append("quay.csv", "te\na,\"one\n");
        Assert.Empty(await TakenRecord.TakeAllAsync(source));
        Append("quay.csv", "two\"\n");
        Assert.Equal([new TakenRecord("""{"id":"a","note":"one\ntwo"}""", 2)], await TakenRecord.TakeAllAsync(source));
        Append("quay.csv", "b,x\n");
        Assert.Equal([new TakenRecord("""{"id":"b","note":"x"}""", 4)], await TakenRecord.TakeAllAsync(source));
    }

    [Fact]
    public async Task Fill_FileThatShrinks_Throws()
    {
        _folder.Write("quay.jsonl", "{\"a\":1}\n");
        using var source = Open("quay.jsonl");
        await TakenRecord.TakeAllAsync(source);
        using (var file = new FileStream(_folder["quay.jsonl"], FileMode.Open, FileAccess.Write, FileShare.ReadWrite)) file.SetLength(3);

        var error = await Assert.ThrowsAsync<PipelineException>(() => TakenRecord.TakeAllAsync(source));
        Assert.EndsWith("quay.jsonl became shorter while it was read: 3 bytes are left of 8.", error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Fill_LongLineStillGrowing_LeadsBackToItsBeginning()
    {
        string start = "{\"a\":1}\n";
        _folder.Write("quay.jsonl", start + new string('x', 3000));
        using var first = Open("quay.jsonl");
        await TakenRecord.TakeAllAsync(first);
        Append("quay.jsonl", new string('x', 3000));
        await TakenRecord.TakeAllAsync(first);

        Assert.Equal(start.Length, Assert.Single(first.Position.Origins).Offset);

        Append("quay.jsonl", "\n{\"a\":3}\n");
        using var second = Open("quay.jsonl");
        second.Seek(first.Position);
        var expected = await TakenRecord.TakeAllAsync(first);
        Assert.Equal(2, expected.Count);
        Assert.Equal("6000 bytes; at most 1000 are allowed", expected[0].Detail);
        Assert.Equal(expected, await TakenRecord.TakeAllAsync(second));
        Assert.Equal(first.Position.Origins, second.Position.Origins);
    }

    [Theory]
    [InlineData("\n{\"a\":2}\n")]
    [InlineData("\r\n{\"a\":2}\n")]
    public async Task Seek_LastLineGotItsEndLater_DoesNotTakeTheEndForALine(string appended)
    {
        _folder.Write("quay.jsonl", "{\"a\":1}");
        using var first = FileSource.Open(new FileSourceOptions(_folder["quay.jsonl"], RecordingFormat.JsonLines), 1000, _time);
        Assert.Single(await TakenRecord.TakeAllAsync(first));
        Append("quay.jsonl", appended);
        using var second = Open("quay.jsonl");
        second.Seek(first.Position);

        Assert.Equal([new TakenRecord("{\"a\":2}", 2)], await TakenRecord.TakeAllAsync(second));
    }

    [Fact]
    public async Task Fill_ByteOrderMark_IsPassedOver()
    {
        _folder.Write("quay.jsonl", "\uFEFF{\"a\":1}\n");
        _folder.Write("quay.csv", "\uFEFFid,x\na,1\n");
        using var lines = Open("quay.jsonl");
        using var csv = Open("quay.csv", RecordingFormat.Csv);

        Assert.Equal([new TakenRecord("{\"a\":1}", 1)], await TakenRecord.TakeAllAsync(lines));
        Assert.Equal([new TakenRecord("""{"id":"a","x":1}""", 2)], await TakenRecord.TakeAllAsync(csv));
    }

    [Fact]
    public void Open_NoSuchFile_Throws()
    {
        var error = Assert.Throws<InvalidRecordingException>(() => Open("none.jsonl"));
        Assert.Equal($"The recording {_folder["none.jsonl"]} does not exist.", error.Message);
    }

    [Fact]
    public void Open_Folder_Throws() => Assert.Throws<InvalidRecordingException>(() => Open("."));
}
