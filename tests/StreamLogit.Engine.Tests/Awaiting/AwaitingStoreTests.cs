using System.Text;
using CsCheck;
using StreamLogit.Engine.Awaiting;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Tests.Awaiting;

public class AwaitingStoreTests
{
    private const int Settings = 3;
    private const long Wait = 1000;

    [Fact]
    public void TryFind_AfterAdd_GivesBackEveryPart()
    {
        var store = new AwaitingStore(Settings, Wait);
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
        var store = new AwaitingStore(Settings, Wait);
        Add(store, "a", clock: 1, firstSlot: 1);
        Add(store, "b", clock: 1, firstSlot: 2);
        Assert.True(store.TryFind("b"u8, 1, out var place));
        Assert.Equal(2, store.At(place).Vector.Slots[0]);
        Assert.False(store.TryFind("c"u8, 1, out _));
    }

    [Fact]
    public void TryFindExpired_AtTheEndOfTheWait_StillWaits()
    {
        var store = new AwaitingStore(Settings, Wait);
        Add(store, "a", clock: 10, firstSlot: 1);
        Assert.False(store.TryFindExpired(10 + Wait, out _));
        Assert.True(store.TryFindExpired(10 + Wait + 1, out _));
    }

    [Fact]
    public void Add_IdLongerThanASegment_IsKept()
    {
        var store = new AwaitingStore(Settings, Wait);
        string id = new('x', 200_000);
        Add(store, id, clock: 1, firstSlot: 1);
        Add(store, "next", clock: 1, firstSlot: 2);
        Assert.True(store.TryFind(Encoding.UTF8.GetBytes(id), 1, out var place));
        store.Remove(place);
        Assert.True(store.TryFind("next"u8, 1, out _));
        Assert.Equal(1, store.Count);
    }

    [Fact]
    public void AnySequence_WithRestarts_AgreesWithADictionary()
    {
        // 0..59 adds, 60..89 takes, 90..97 lets time pass, 98 and 99 save, load and go on with the loaded store.
        Gen.Select(Gen.Int[0, 99], Gen.Int[0, 400]).Array[0, 4000].Sample(operations =>
        {
            var store = new AwaitingStore(Settings, Wait);
            var kept = new StateBlocks();
            var model = new Dictionary<string, long>(StringComparer.Ordinal);
            long clock = 0;
            foreach (var (operation, number) in operations)
            {
                string id = $"event-{number}";
                switch (operation)
                {
                    case < 60 when !model.ContainsKey(id):
                        Add(store, id, clock, number);
                        model[id] = clock;
                        break;
                    case >= 60 and < 90:
                        Assert.Equal(model.Remove(id), store.TryFind(Encoding.UTF8.GetBytes(id), 1, out var place));
                        if (place != default || store.Count > model.Count) store.Remove(place);
                        break;
                    case >= 90 and < 98:
                        clock += number;
                        while (store.TryFindExpired(clock, out var expired))
                        {
                            string expiredId = Encoding.UTF8.GetString(store.At(expired).Id);
                            Assert.True(clock - model[expiredId] > Wait);
                            model.Remove(expiredId);
                            store.Remove(expired);
                        }
                        Assert.DoesNotContain(model, m => clock - m.Value > Wait);
                        break;
                    case >= 98:
                        store.Save(kept);
                        store = new AwaitingStore(Settings, Wait);
                        store.Load(kept);
                        break;
                }
                Assert.Equal(model.Count, store.Count);
            }
            foreach (string id in model.Keys) Assert.True(store.TryFind(Encoding.UTF8.GetBytes(id), 1, out _));
        }, iter: 60, seed: "0000KQZ5Nuf5");
    }

    // Every id has the same hash: the worst case, and the one that shows whether ids are compared.
    private static void Add(AwaitingStore store, string id, long clock, int firstSlot) => store.Add(
        new AwaitingHeader { IdHash = 1, ScoredAtMicroseconds = clock },
        [firstSlot + 0.25, firstSlot + 1.25, firstSlot + 2.25],
        new EncodedVector([firstSlot, firstSlot + 1], [firstSlot + 0.5, -firstSlot - 0.5]),
        Encoding.UTF8.GetBytes(id));
}
