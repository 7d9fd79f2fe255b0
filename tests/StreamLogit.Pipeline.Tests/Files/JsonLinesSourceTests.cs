using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Tests.Files;

public sealed class JsonLinesSourceTests : FileSourceContract
{
    private protected override string LastFile => Folder["quay.jsonl"];

    private protected override List<TakenRecord> Arrange(int records)
    {
        var taken = Enumerable.Range(1, records).Select(i => new TakenRecord(Record(i), i)).ToList();
        Folder.Write("quay.jsonl", string.Join("\n", taken.Select(record => record.Text)));
        return taken;
    }

    private protected override IRecordSource Open() =>
        FileSource.Open(new FileSourceOptions(LastFile, RecordingFormat.JsonLines), 1000, TimeProvider.System);
}
