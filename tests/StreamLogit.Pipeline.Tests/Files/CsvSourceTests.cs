using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Tests.Files;

public sealed class CsvSourceTests : FileSourceContract
{
    private protected override string LastFile => Folder["quay.csv"];

    private protected override List<TakenRecord> Arrange(int records)
    {
        var lines = new List<string> { "id,amount,\"note\nof two lines\",empty" };
        var taken = new List<TakenRecord>();
        int line = 3;
        for (int i = 1; i <= records; i++)
        {
            string note = new((char)('a' + i % 26), i * 7919 % 301);
            bool isLong = i % 5 == 0;
            lines.Add(isLong ? $"t-{i},{i},\"{note}\n, \"\"so\"\"\"," : $"t-{i},{i},x{note},");
            string noteJson = isLong ? $"{note}\\n, \\\"so\\\"" : $"x{note}";
            taken.Add(new TakenRecord($$"""{"id":"t-{{i}}","amount":{{i}},"note\nof two lines":"{{noteJson}}"}""", line));
            line += isLong ? 2 : 1;
        }
        Folder.Write("quay.csv", string.Join("\n", lines) + "\n");
        return taken;
    }

    private protected override IRecordSource Open() =>
        FileSource.Open(new FileSourceOptions(LastFile, RecordingFormat.Csv), 1000, TimeProvider.System);
}
