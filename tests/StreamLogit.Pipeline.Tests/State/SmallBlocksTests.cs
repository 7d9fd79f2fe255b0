using StreamLogit.Engine;
using StreamLogit.Engine.Persistence;
using StreamLogit.Pipeline.Replay;
using StreamLogit.Pipeline.State;

namespace StreamLogit.Pipeline.Tests.State;

/// <summary>The part of an archive with very many small blocks, in both archives.</summary>
public sealed class SmallBlocksTests : IDisposable
{
    private static readonly string Part = ScoringEngine.SmallBlocksPart;

    private readonly TemporaryFolder _folder = new();
    private byte[] _target = [];

    public void Dispose() => _folder.Dispose();

    [Fact]
    public void Temporary_RandomWrites_ReadBackTheLast()
    {
        using var archive = new TemporaryArchive();
        Check(archive, commit: () => { });
    }

    [Fact]
    public void State_RandomWritesAndCommits_ReadBackTheLast()
    {
        using var store = StateStore.Open(_folder["state"], "quay", "{}");
        var taken = new Queue<StateBlocks>();
        Check(store.Archive, commit: () =>
        {
            // A commit comes some time after what it commits was taken.
            taken.Enqueue(store.Archive.Take());
            if (taken.Count < 3) return;
            var blocks = taken.Dequeue();
            store.Commit(new Checkpoint(new SourcePosition([]), System.Collections.Immutable.ImmutableSortedDictionary<string, long>.Empty, blocks));
            store.Archive.Committed(blocks);
        });
    }

    [Fact]
    public void State_Reopened_HasWhatWasCommittedAndNothingElse()
    {
        using (var store = StateStore.Open(_folder["state"], "quay", "{}"))
        {
            store.Archive.Write(Part, -5, "old"u8);
            store.Archive.Write(Part, long.MaxValue, "kept"u8);
            store.Commit(new Checkpoint(new SourcePosition([]), System.Collections.Immutable.ImmutableSortedDictionary<string, long>.Empty, store.Archive.Take()));
            store.Archive.Write(Part, -5, "lost"u8);
            store.Archive.Write(Part, 7, "lost"u8);
        }
        using var again = StateStore.Open(_folder["state"], "quay", "{}");
        Assert.Equal("old", Read(again.Archive, -5));
        Assert.Equal("kept", Read(again.Archive, long.MaxValue));
        Assert.Null(Read(again.Archive, 7));
        Assert.Empty(again.Read()!.Blocks.Changes()); // they are not loaded with the rest
        Assert.Equal([-5, long.MaxValue], again.Archive.Numbers(Part));
        var part = StateStore.Peek(_folder["state"]).Info.Parts.Single(p => p.Name == Part);
        Assert.Equal((2, 7), (part.Blocks, part.Bytes));
    }

    private void Check(IBlockArchive archive, Action commit)
    {
        var random = new Random(4);
        var model = new Dictionary<long, string>();
        for (int i = 0; i < 100_000; i++)
        {
            long number = (long)((ulong)random.Next(20_000) * 0x9E3779B97F4A7C15);
            Assert.Equal(model.GetValueOrDefault(number), Read(archive, number));
            if (random.Next(2) == 0)
            {
                string text = new('x', random.Next(300));
                archive.Write(Part, number, System.Text.Encoding.UTF8.GetBytes(text));
                model[number] = text;
            }
            if (random.Next(5000) == 0) commit();
        }
    }

    private string? Read(IBlockArchive archive, long number) =>
        archive.TryRead(Part, number, ref _target, out int length) ? System.Text.Encoding.UTF8.GetString(_target, 0, length) : null;
}
