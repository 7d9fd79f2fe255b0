using System.Collections.Immutable;
using System.Text;
using StreamLogit.Engine.Persistence;
using StreamLogit.Pipeline.State;
using StreamLogit.Pipeline.Transactions;

namespace StreamLogit.Pipeline.Tests.Transactions;

public sealed class JournalTests : IDisposable
{
    private readonly TemporaryFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    private StateStore Open() => StateStore.Open(_folder["state"], "quay", "{}");

    private static JournalEntry Entry(long from) => new([new OriginSpan("tickets-0@", from, from + 5)], [new OrderRun(0, 4)]);

    private static void Add(MergedOrder order, params (string Origin, long Position)[] records)
    {
        var batch = Schemas.NewBatch();
        foreach (var (origin, position) in records)
        {
            batch.Add(Encoding.UTF8.GetBytes("{}"), position);
            batch.Records[^1].Origin = origin;
        }
        order.Add(batch);
    }

    [Fact]
    public void MergedOrder_SeveralBatches_IsRunsOfOrigins()
    {
        var order = new MergedOrder();
        Add(order, ("a", 5), ("a", 6), ("b", 9), ("a", 8));
        Add(order, ("a", 9), ("b", 20));

        var entry = order.Take();

        Assert.Equal([new OriginSpan("a", 5, 10), new OriginSpan("b", 9, 21)], entry.Spans);
        Assert.Equal([new OrderRun(0, 2), new OrderRun(1, 1), new OrderRun(0, 2), new OrderRun(1, 1)], entry.Order);
        Assert.Empty(order.Take().Spans);
    }

    [Fact]
    public void Bytes_OfAnEntry_AreFewAndGiveItAgain()
    {
        var entry = new JournalEntry(
            [.. Enumerable.Range(0, 4).Select(i => new OriginSpan($"tickets-{i}@", 5_000_000_000 + i, 5_000_002_500 + i))], [.. Enumerable.Range(0, 100).Select(i => new OrderRun(i % 4, 100))]);

        byte[] bytes = entry.ToBytes();
        var again = JournalEntry.FromBytes(bytes);

        Assert.Equal(entry.Spans, again.Spans);
        Assert.Equal(entry.Order, again.Order);
        Assert.InRange(bytes.Length, 200, 300);
    }

    [Fact]
    public void Append_NotConfirmed_IsReplacedByTheNext()
    {
        using (var state = Open())
        {
            state.AppendJournal(Entry(0));
            state.ConfirmJournal();
            state.AppendJournal(Entry(5));
            state.AppendJournal(Entry(6));
        }
        using var again = Open();
        Assert.Equal([0, 6], again.ReadJournal().Select(entry => entry.Spans[0].From));

        again.KeepJournal(1);
        again.AppendJournal(Entry(7));
        Assert.Equal([0, 7], again.ReadJournal().Select(entry => entry.Spans[0].From));
    }

    [Fact]
    public void Commit_OfTheState_EndsTheJournal()
    {
        using var state = Open();
        var checkpoint = new Checkpoint(SourcePosition.Start, ImmutableSortedDictionary<string, long>.Empty, new StateBlocks());
        state.AppendJournal(Entry(0));
        state.ConfirmJournal();

        state.Commit(checkpoint, keepsJournal: true);
        Assert.Single(state.ReadJournal());
        state.Commit(checkpoint);
        Assert.Empty(state.ReadJournal());
    }

    [Fact]
    public void Read_DamagedEntry_Throws()
    {
        using (var state = Open()) state.AppendJournal(Entry(0));
        using (var connection = new Microsoft.Data.Sqlite.SqliteConnection($"Data Source={_folder["state/state.db"]};Pooling=False"))
        {
            connection.Open();
            using var command = connection.CreateCommand();
            command.CommandText = "UPDATE journal SET bytes = zeroblob(length(bytes))";
            command.ExecuteNonQuery();
        }
        using var damaged = Open();

        Assert.Contains("an entry of the journal changed", Assert.Throws<PipelineException>(() => damaged.ReadJournal()).Message, StringComparison.Ordinal);
    }
}
