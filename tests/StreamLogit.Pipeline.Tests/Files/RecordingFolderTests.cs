using System.Text;
using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Tests.Files;

public sealed class RecordingFolderTests : IDisposable
{
    private readonly TemporaryFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    private string OutPath => _folder["out"];

    private RecordingFolder Open(long maximumBytes = 1 << 20) => new(new RecordingOptions(OutPath, maximumBytes));

    private List<string> Names() => [.. Directory.EnumerateFiles(OutPath).Select(path => Path.GetFileName(path)).Order(StringComparer.Ordinal)];

    private string Recorded() => string.Concat(Names().Select(name => Encoding.Latin1.GetString(Packing.Unpack(Path.Combine(OutPath, name)))));

    private static string Event(int i, string time) => $$"""{"id":"t-{{i}}","time":"{{time}}","amount":{{i}}}""";

    private static void Write(RecordingFolder recording, params string[] records) => ScoredBatch.Of(Schemas.Definition, 1, records).WriteTo(recording);

    [Fact]
    public void Write_SeveralDays_BeginsAFileWithEach()
    {
        string[] records =
        [
            "garbage \u00ff", Event(1, "2026-02-28T23:59:59Z"), Event(2, "2026-03-01T00:00:00Z"), Event(3, "2026-02-28T12:00:00Z"), "", Event(4, "2026-03-03T00:00:00Z"),
        ];
        using (var recording = Open())
        {
            recording.Start(null);
            foreach (string record in records) Write(recording, record);
            long mark = recording.Flush();
            Assert.Equal(Names().Sum(name => new FileInfo(Path.Combine(OutPath, name)).Length), mark);
        }

        Assert.Equal(["undated", "2026-02-28", "2026-03-01", "2026-03-03"], Names().Select(name => name[17..^".jsonl.zst".Length]));
        Assert.Equal(string.Concat(records.Select(record => record + "\n")), Recorded());
    }

    [Fact]
    public void Write_LineEndWithinARecord_IsASpace()
    {
        using var recording = Open();
        recording.Start(null);
        Write(recording, "{\"id\":\"a\",\n\"time\":\"2026-03-01T00:00:00Z\"}");
        recording.Flush();

        Assert.Equal("{\"id\":\"a\", \"time\":\"2026-03-01T00:00:00Z\"}\n", Recorded());
    }

    [Theory]
    [InlineData(1 << 20)]
    [InlineData(300)]
    [InlineData(1)]
    public void Start_AtAnyMark_TakesBackWhatWasWrittenAfterIt(long maximumBytes)
    {
        string[] times = ["2026-02-28T23:59:59Z", "2026-03-01T00:00:00Z", "2026-03-01T10:00:00Z", "2026-03-02T10:00:00Z", "2026-03-03T10:00:00Z"];
        var marks = new List<(long Mark, string Text)>();
        for (int commits = 0; commits <= times.Length; commits++)
        {
            using (var recording = Open(maximumBytes))
            {
                recording.Start(commits == 0 ? null : marks[commits - 1].Mark);
                Assert.Equal(commits == 0 ? "" : marks[commits - 1].Text, Recorded());
                if (commits == times.Length) break;
                Write(recording, [.. Enumerable.Range(0, 50).Select(i => Event(i, times[commits]))]);
                marks.Add((recording.Flush(), ""));
                marks[commits] = (marks[commits].Mark, Recorded());
                // Never committed: of the same day, of the next, and of a far one.
                Write(recording, Event(51, times[commits]), Event(52, "2026-03-05T00:00:00Z"), Event(53, "2026-04-05T00:00:00Z"));
                if (commits % 2 == 0) recording.Flush();
            }
        }

        Assert.Equal(250, Recorded().Count(character => character == '\n'));
        Assert.Equal(maximumBytes == 1 ? 5 : 4, Names().Count);
    }

    [Fact]
    public void Start_RecordingsThatNobodyCommitted_ThrowsAndLeavesThem()
    {
        using (var recording = Open())
        {
            recording.Start(null);
            Write(recording, Event(1, "2026-03-01T00:00:00Z"));
            recording.Flush();
        }
        string recorded = Recorded();
        using var second = Open();

        var error = Assert.Throws<PipelineException>(() => second.Start(null));
        Assert.StartsWith($"{OutPath} already holds recordings", error.Message, StringComparison.Ordinal);
        Assert.Equal(recorded, Recorded());
    }

    [Fact]
    public void Start_LastFileCutOrGone_Throws()
    {
        long mark;
        using (var recording = Open())
        {
            recording.Start(null);
            Write(recording, Event(1, "2026-03-01T00:00:00Z"));
            mark = recording.Flush();
        }
        using var second = Open();
        Assert.Throws<PipelineException>(() => second.Start(mark + 1));
        File.Delete(Path.Combine(OutPath, Names()[0]));
        Assert.Throws<PipelineException>(() => second.Start(mark));
    }

    [Fact]
    public void Flush_NothingWritten_IsZeroAndLeavesNoFile()
    {
        using var recording = Open();
        recording.Start(null);

        Assert.Equal(0, recording.Flush());
        Assert.Empty(Names());
    }

    [Fact]
    public void Start_PathIsAFile_Throws()
    {
        _folder.Write("out", "");
        using var recording = Open();

        Assert.Throws<PipelineException>(() => recording.Start(null));
    }
}
