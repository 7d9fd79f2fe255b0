using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Tests.Files;

public sealed class RecordingSequenceTests : FileSourceContract
{
    private protected override string LastFile => Folder["c.jsonl"];

    private protected override List<TakenRecord> Arrange(int records)
    {
        var taken = Enumerable.Range(0, records).Select(i => new TakenRecord(Record(i), i / 3 + 1)).ToList();
        // Every third record stands in the same file, so the order of the sequence is that of the files.
        foreach (var (name, part) in new[] { ("a.jsonl", 0), ("b.jsonl", 1), ("c.jsonl", 2) })
            Folder.Write(name, string.Concat(taken.Where((_, i) => i % 3 == part).Select(record => record.Text + "\n")));
        Folder.Write("empty.jsonl", "");
        return [.. Enumerable.Range(0, 3).SelectMany(part => taken.Where((_, i) => i % 3 == part))];
    }

    private protected override IRecordSource Open() => new RecordingSequence(
        [.. new[] { "a", "empty", "b", "c" }.Select(name => new FileSourceOptions(Folder[name + ".jsonl"], RecordingFormat.JsonLines))],
        1000, TimeProvider.System);

    [Fact]
    public void Constructor_LastRecordingMissing_Throws()
    {
        Arrange(3);
        File.Delete(LastFile);

        var error = Assert.Throws<InvalidRecordingException>(Open);
        Assert.Equal($"The recording {LastFile} does not exist.", error.Message);
    }

    [Fact]
    public async Task Fill_SeveralRecordings_NamesTheOriginOfEachBatch()
    {
        Arrange(9);
        using var source = Open();
        var batch = Schemas.NewBatch();
        var origins = new List<string>();
        while (await source.FillAsync(batch, 2, CancellationToken.None) == FillOutcome.Filled)
        {
            origins.Add($"{batch.Origin}:{batch.Records[0].Position}");
            batch.Clear();
        }

        Assert.Equal(["a.jsonl:1", "a.jsonl:3", "b.jsonl:1", "b.jsonl:3", "c.jsonl:1", "c.jsonl:3"], origins);
    }
}
