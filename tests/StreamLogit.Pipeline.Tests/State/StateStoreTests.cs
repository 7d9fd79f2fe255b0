using System.Collections.Immutable;
using System.Text;
using Microsoft.Data.Sqlite;
using StreamLogit.Engine.Persistence;
using StreamLogit.Pipeline.State;

namespace StreamLogit.Pipeline.Tests.State;

public sealed class StateStoreTests : IDisposable
{
    private readonly TemporaryFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    private string StatePath => _folder["state"];

    private string DatabasePath => Path.Combine(StatePath, "state.db");

    private StateStore Open(string stream = "quay", string definition = "{}") => StateStore.Open(StatePath, stream, definition);

    private static Checkpoint NewCheckpoint(long offset, params (string Part, long Number, string? Bytes)[] changes)
    {
        var blocks = new StateBlocks();
        foreach (var (part, number, bytes) in changes)
        {
            if (bytes is null) blocks.Remove(part, number);
            else blocks.Put(part, number, Encoding.UTF8.GetBytes(bytes));
        }
        return new Checkpoint(
            new SourcePosition([new OriginPosition("a.jsonl", 10, 1, ulong.MaxValue), new OriginPosition("b.jsonl", offset, 2, 3)]),
            ImmutableSortedDictionary<string, long>.Empty.Add("scores", offset * 2).Add("rejects", 0),
            blocks);
    }

    private static IEnumerable<(string, long, string?)> Blocks(Checkpoint checkpoint) =>
        checkpoint.Blocks.Changes().Select(block => (block.Part, block.Number, block.Bytes is null ? null : Encoding.UTF8.GetString(block.Bytes)));

    [Fact]
    public void Read_NewState_IsNull()
    {
        using var state = Open();

        Assert.Null(state.Read());
    }

    [Fact]
    public void Read_AfterCommits_GivesAllChangesTogether()
    {
        using (var state = Open())
        {
            state.Commit(NewCheckpoint(100, ("bank", 0, "zero"), ("bank", -1, "minus"), ("awaiting", long.MaxValue, ""), ("awaiting", 7, "x")));
            state.Commit(NewCheckpoint(200, ("bank", 0, "new"), ("awaiting", 7, null), ("awaiting", 8, null)));
        }
        using var again = Open();
        var checkpoint = again.Read()!;

        Assert.Equal(NewCheckpoint(200).Position.Origins, checkpoint.Position.Origins);
        Assert.Equal(NewCheckpoint(200).Marks, checkpoint.Marks);
        Assert.Equal([("awaiting", long.MaxValue, ""), ("bank", -1, "minus"), ("bank", 0, "new")], Blocks(checkpoint));
    }

    [Fact]
    public void Commit_DiesBeforeItsEnd_LeavesTheOneBefore()
    {
        using (var state = Open())
        {
            state.Commit(NewCheckpoint(100, ("bank", 0, "old"), ("bank", 1, "kept")));
            state.BeforeCommit = () => throw new InvalidOperationException("dies here");
            Assert.Throws<InvalidOperationException>(() => state.Commit(NewCheckpoint(200, ("bank", 0, "new"), ("bank", 1, null))));
        }
        using var again = Open();
        var checkpoint = again.Read()!;

        Assert.Equal(NewCheckpoint(100).Position.Origins, checkpoint.Position.Origins);
        Assert.Equal(NewCheckpoint(100).Marks, checkpoint.Marks);
        Assert.Equal([("bank", 0, "old"), ("bank", 1, "kept")], Blocks(checkpoint));
    }

    [Fact]
    public void Open_FolderOfARunningWorker_Throws()
    {
        using var first = Open();

        var error = Assert.Throws<PipelineException>(() => Open());
        Assert.Equal($"The state folder {StatePath} is in use by another worker. One state serves one worker at a time.", error.Message);
    }

    [Fact]
    public void Open_StateOfAnotherStream_ThrowsAndLeavesIt()
    {
        using (var state = Open()) state.Commit(NewCheckpoint(100));

        var error = Assert.Throws<PipelineException>(() => Open("pumps"));
        Assert.Equal($"The state {DatabasePath} belongs to the stream 'quay', not to 'pumps'.", error.Message);
        using var again = Open();
        Assert.NotNull(again.Read());
    }

    [Fact]
    public void Peek_RunningWorker_SeesTheLastCommit()
    {
        using var state = Open(definition: "{\"a\":1}");
        Assert.Throws<PipelineException>(() => StateStore.Peek(StatePath));
        state.Commit(NewCheckpoint(100, ("bank", 0, "zero")));
        state.Commit(NewCheckpoint(200));

        var (info, checkpoint) = StateStore.Peek(StatePath);
        Assert.Equal(("quay", "{\"a\":1}", 2), (info.Stream, info.Definition, info.Commits));
        Assert.Equal([new StatePart("bank", 1, 4)], info.Parts);
        Assert.Equal([("bank", 0, "zero")], Blocks(checkpoint));
        Assert.Equal(200, checkpoint.Position.Origins[1].Offset);
    }

    [Fact]
    public void Peek_NoState_ThrowsAndMakesNone()
    {
        var error = Assert.Throws<PipelineException>(() => StateStore.Peek(StatePath));
        Assert.Equal($"There is no state in {StatePath}.", error.Message);
        Assert.False(Directory.Exists(StatePath));
    }

    [Fact]
    public void Open_FileThatIsNoDatabase_Throws()
    {
        Directory.CreateDirectory(StatePath);
        File.WriteAllText(DatabasePath, string.Concat(Enumerable.Repeat("no database at all. ", 1000)));

        AssertDamaged(() => Open());
    }

    [Fact]
    public void Open_DatabaseOfAnotherProgram_Throws()
    {
        Directory.CreateDirectory(StatePath);
        Execute("CREATE TABLE meta(key TEXT PRIMARY KEY, value TEXT)");

        AssertDamaged(() => Open());
    }

    [Fact]
    public void Open_LaterFormat_Throws()
    {
        Open().Dispose();
        Execute("PRAGMA user_version = 2");

        var error = Assert.Throws<PipelineException>(() => Open());
        Assert.Contains("was written by a later version of this program (format 2; this one reads up to 1)", error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Read_BlockWithAFlippedBit_Throws()
    {
        using (var state = Open()) state.Commit(NewCheckpoint(100, ("bank", 3, "coefficients")));
        Execute("UPDATE blocks SET bytes = CAST('coefficientt' AS BLOB)");
        using var again = Open();

        var error = AssertDamaged(() => again.Read());
        Assert.Contains("block 3 of its part 'bank' has changed since it was written", error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Read_ValueOfAnotherKind_Throws()
    {
        using (var state = Open()) state.Commit(NewCheckpoint(100));
        Execute("UPDATE meta SET value = 'many' WHERE key = 'commits'");

        AssertDamaged(() => Open());
    }

    // Every page of the file in turn is overwritten with noise.
    [Fact]
    public void OpenAndRead_OverwrittenPage_ThrowsOrGivesWhatWasCommitted()
    {
        var written = Enumerable.Range(0, 200).Select(i => ("bank", (long)i, (string?)new string((char)('a' + i % 26), 500))).ToArray();
        using (var state = Open()) state.Commit(NewCheckpoint(100, written));
        byte[] sound = File.ReadAllBytes(DatabasePath);
        Assert.True(sound.Length > 20 * 4096);
        var random = new Random(7);
        int detected = 0;
        for (int page = 0; page < sound.Length / 4096; page++)
        {
            byte[] damaged = [.. sound];
            random.NextBytes(damaged.AsSpan(page * 4096, 4096));
            File.WriteAllBytes(DatabasePath, damaged);
            try
            {
                using var state = Open();
                Assert.Equal(written.OrderBy(block => block.Item2), Blocks(state.Read()!));
            }
            catch (PipelineException e)
            {
                detected++;
                Assert.Contains(DatabasePath, e.Message, StringComparison.Ordinal);
            }
        }

        Assert.True(detected > 20);
    }

    [Fact]
    public void Open_FolderThatCannotBeMade_Throws()
    {
        _folder.Write("state", "a file");

        Assert.Throws<PipelineException>(() => Open());
    }

    private PipelineException AssertDamaged(Func<object?> use)
    {
        var error = Assert.Throws<PipelineException>(use);
        Assert.StartsWith($"The state {DatabasePath} is damaged: ", error.Message, StringComparison.Ordinal);
        return error;
    }

    private void Execute(string sql)
    {
        using var connection = new SqliteConnection($"Data Source={DatabasePath};Pooling=False");
        connection.Open();
        using var command = connection.CreateCommand();
        command.CommandText = sql;
        command.ExecuteNonQuery();
    }
}
