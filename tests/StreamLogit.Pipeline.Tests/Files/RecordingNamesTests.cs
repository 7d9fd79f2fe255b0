using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Tests.Files;

public sealed class RecordingNamesTests : IDisposable
{
    private readonly TemporaryFolder _folder = new();

    public RecordingNamesTests()
    {
        foreach (string name in (string[])["b.jsonl", "a.csv.gz", "B.jsonl.zst", "c.parquet", "notes.txt", ".hidden.jsonl"]) _folder.Write(name, "");
    }

    public void Dispose() => _folder.Dispose();

    private List<(string, RecordingFormat)> Find(string name, RecordingFormat format = RecordingFormat.ByName) =>
        [.. RecordingNames.Find(new FileSourceOptions(_folder[name], format)).Select(found => (Path.GetFileName(found.Path), found.Format))];

    [Theory]
    [InlineData("")]
    [InlineData("./")]
    public void Find_Folder_IsItsRecordingsInTheOrderOfTheirNames(string name) => Assert.Equal(
        [
            ("B.jsonl.zst", RecordingFormat.JsonLines), ("a.csv.gz", RecordingFormat.Csv), ("b.jsonl", RecordingFormat.JsonLines),
            ("c.parquet", RecordingFormat.Parquet),
        ],
        Find(name));

    [Fact]
    public void Find_Pattern_IsWhatFits()
    {
        Assert.Equal([("B.jsonl.zst", RecordingFormat.JsonLines), ("b.jsonl", RecordingFormat.JsonLines)], Find("?.jsonl*"));
        Assert.Equal([("notes.txt", RecordingFormat.Csv)], Find("n*", RecordingFormat.Csv));
    }

    [Theory]
    [InlineData("x*.jsonl", "No file is there whose name fits ")]
    [InlineData("none/", "The folder ")]
    [InlineData("n*", "The name ")]
    [InlineData("none/*.jsonl", "The folder ")]
    public void Find_Nothing_Throws(string name, string message)
    {
        var error = Assert.Throws<InvalidRecordingException>(() => Find(name));
        Assert.StartsWith(message, error.Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("a.JSONL.GZ", RecordingFormat.JsonLines)]
    [InlineData("a.ndjson.zst", RecordingFormat.JsonLines)]
    [InlineData("a.csv", RecordingFormat.Csv)]
    [InlineData("a.Parquet", RecordingFormat.Parquet)]
    [InlineData("a.parquet.gz", null)]
    [InlineData("a.gz", null)]
    [InlineData("jsonl", null)]
    public void OfName_Ending_TellsTheFormat(string name, RecordingFormat? format) => Assert.Equal(format, RecordingFormats.OfName(name));
}
