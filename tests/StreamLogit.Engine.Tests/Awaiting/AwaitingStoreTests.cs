using System.Text;
using CsCheck;
using StreamLogit.Engine.Awaiting;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Tests.Awaiting;

public class AwaitingStoreTests
{
    private static readonly string[] Settings = ["a", "b", "c"];
    private const long Wait = 1000;

    [Fact]
    public void TryFind_AfterAdd_GivesBackEveryPart()
    {
        var store = InMemory();
        Add(store, "t-81", clock: 17, firstSlot: 5);
        Assert.True(store.TryFind("t-81"u8, 1, out var place));
        var found = store.At(place);
        Assert.Equal("t-81", Encoding.UTF8.GetString(found.Id));
        Assert.Equal(17, found.Header.ScoredAtMicroseconds);
        Assert.Equal([5.25, 6.25, 7.25], found.LogOdds.ToArray());
        Assert.Equal([5, 6], found.Vector.Slots.ToArray());
        Assert.Equal([5.5, -5.5], found.Vector.Values.ToArray());
    }

    [Fact]
    public void TryFind_OtherIdWithTheSameHash_IsNotConfused()
    {
        var store = InMemory();
        Add(store, "a", clock: 1, firstSlot: 1);
        Add(store, "b", clock: 1, firstSlot: 2);
        Assert.True(store.TryFind("b"u8, 1, out var place));
        Assert.Equal(2, store.At(place).Vector.Slots[0]);
        Assert.False(store.TryFind("c"u8, 1, out _));
    }

    [Fact]
    public void TryTakeExpired_AtTheEndOfTheWait_StillWaits()
    {
        var store = new AwaitingStore([.. Settings], Wait, keepsAssumed: true, memoryBytes: 1 << 16, archive: null);
        Add(store, "a", clock: 10, firstSlot: 1);
        Assert.False(store.TryTakeExpired(10 + Wait, out _));
        Assert.True(store.TryTakeExpired(10 + Wait + 1, out _));
    }

    [Fact]
    public void Forget_AtTheEndOfTheWait_StillKeeps()
    {
        var store = InMemory();
        Add(store, "a", clock: 10, firstSlot: 1);
        Assert.Equal(0, store.Forget(10 + Wait));
        Assert.Equal(1, store.Kept);
        Assert.Equal(1, store.Forget(10 + Wait + 1));
        Assert.Equal(0, store.Kept);
    }

    [Fact]
    public void Add_IdLongerThanASegment_IsKept()
    {
        var store = InMemory();
        string id = new('x', 200_000);
        Add(store, id, clock: 1, firstSlot: 1);
        Add(store, "next", clock: 1, firstSlot: 2);
        Assert.True(store.TryFind(Encoding.UTF8.GetBytes(id), 1, out _));
        Assert.True(store.TryFind("next"u8, 1, out _));
        Assert.Equal(2, store.Awaiting);
    }

    [Theory]
    [InlineData(false, false)]
    [InlineData(true, false)]
    [InlineData(false, true)]
    [InlineData(true, true)]
    public void AnySequence_WithRestarts_AgreesWithADictionary(bool isArchived, bool keepsAssumed)
    {
        // 0..59 adds, 60..89 labels, 90..97 lets time pass, 98 and 99 save, load and go on with the loaded store. Ids are long, so that segments fill.
        Gen.Select(Gen.Int[0, 99], Gen.Int[0, 400]).Array[0, 4000].Sample(operations =>
        {
            var archive = isArchived ? new DictionaryArchive() : null;
            var kept = archive?.Blocks ?? new StateBlocks();
            var store = Store(archive, keepsAssumed);
            var model = new Dictionary<string, (long ScoredAt, EventState State)>(StringComparer.Ordinal);
            long clock = 0;
            foreach (var (operation, number) in operations)
            {
                string id = $"event-{number}-{new string('x', 900)}";
                switch (operation)
                {
                    case < 60 when !model.ContainsKey(id):
                        Add(store, id, clock, number);
                        model[id] = (clock, EventState.Awaiting);
                        break;
                    case >= 60 and < 90:
                        bool isKept = store.TryFind(Encoding.UTF8.GetBytes(id), 1, out var place);
                        Assert.Equal(model.ContainsKey(id), isKept);
                        if (!isKept) break;
                        Assert.Equal(model[id].State, store.MarkOf(place).State);
                        var state = operation % 2 == 0 ? EventState.Good : EventState.Bad;
                        store.Mark(place, new LabelMark(state, default));
                        model[id] = model[id] with { State = state };
                        break;
                    case >= 90 and < 98:
                        clock += number;
                        while (keepsAssumed && store.TryTakeExpired(clock, out var expired))
                        {
                            string expiredId = Encoding.UTF8.GetString(store.At(expired).Id);
                            Assert.True(clock - model[expiredId].ScoredAt > Wait && model[expiredId].State == EventState.Awaiting);
                            store.Mark(expired, new LabelMark(EventState.AssumedGood, default));
                            model[expiredId] = model[expiredId] with { State = EventState.AssumedGood };
                        }
                        var old = model.Where(m => clock - m.Value.ScoredAt > (keepsAssumed ? 2 * Wait : Wait)).ToList();
                        Assert.Equal(old.Count(m => m.Value.State == EventState.Awaiting), store.Forget(clock));
                        foreach (var (oldId, _) in old) model.Remove(oldId);
                        break;
                    case >= 98:
                        store.Save(kept);
                        store = Store(archive, keepsAssumed);
                        store.Load(kept);
                        break;
                }
                Assert.Equal(model.Count, store.Kept);
                Assert.Equal(model.Values.Count(m => m.State == EventState.Awaiting), store.Awaiting);
            }
            foreach (string id in model.Keys) Assert.True(store.TryFind(Encoding.UTF8.GetBytes(id), 1, out _));
        }, iter: 30, seed: "0000KQZ5Nuf5");
    }

    /// <summary>A setting that the bank did not have when an event was scored takes what was published.</summary>
    [Fact]
    public void Load_OtherSettings_GivesTheirLogOddsByName()
    {
        var state = new StateBlocks();
        var store = InMemory();
        Add(store, "first", clock: 1, firstSlot: 1);
        store.Save(state);
        foreach (string[] settings in new[] { ["x"], Settings, new[] { "c", "new", "a" }, ["new", "a"] })
        {
            store = new AwaitingStore([.. settings], Wait, keepsAssumed: false, memoryBytes: 1 << 16, null);
            store.Load(state);
            Assert.True(store.TryFind("first"u8, 1, out var first));
            Assert.Equal(settings.Select(name => name switch { "a" => 1.25, "b" => 2.25, "c" => 3.25, _ => 0.5 }), store.LogOddsOf(first).ToArray());
            Assert.Equal("first", Encoding.UTF8.GetString(store.At(first).Id));
            string id = string.Concat(settings);
            store.Add(new KeptHeader { IdHash = 1, ScoredAtMicroseconds = 2, LogOdds = 7 }, [.. settings.Select((_, i) => (double)i)], new EncodedVector([9], [1]), Encoding.UTF8.GetBytes(id));
            var changes = new StateBlocks();
            store.Save(changes);
            foreach (var (part, number, bytes) in changes.Changes())
                if (bytes is null) state.Remove(part, number);
                else state.Put(part, number, bytes);
        }

        // Scored by x; by a, b, c; by c, new, a; by new, a.
        Assert.Equal([7.0, 7], Find("x"));
        Assert.Equal([7.0, 0], Find("abc"));
        Assert.Equal([1.0, 2], Find("cnewa"));
        Assert.Equal([0.0, 1], Find("newa"));

        store.Forget(1 + Wait + 1);
        Assert.False(store.TryFind("first"u8, 1, out _));
        store.Save(state);
        var again = new AwaitingStore(["new", "a"], Wait, keepsAssumed: false, memoryBytes: 1 << 16, null);
        again.Load(state);
        Assert.Equal(4, again.Kept);

        double[] Find(string id)
        {
            Assert.True(store.TryFind(Encoding.UTF8.GetBytes(id), 1, out var place));
            return store.LogOddsOf(place).ToArray();
        }
    }

    private static AwaitingStore InMemory() => Store(null);

    // The archive takes what does not fit into four segments.
    private static AwaitingStore Store(IBlockArchive? archive, bool keepsAssumed = false) => new([.. Settings], Wait, keepsAssumed, memoryBytes: 1 << 16, archive);

    // Every id has the same hash: the worst case, and the one that shows whether ids are compared.
    private static void Add(AwaitingStore store, string id, long clock, int firstSlot) => store.Add(
        new KeptHeader { IdHash = 1, ScoredAtMicroseconds = clock, LogOdds = 0.5 },
        [firstSlot + 0.25, firstSlot + 1.25, firstSlot + 2.25],
        new EncodedVector([firstSlot, firstSlot + 1], [firstSlot + 0.5, -firstSlot - 0.5]),
        Encoding.UTF8.GetBytes(id));
}
