using Confluent.Kafka;
using StreamLogit.Kafka.Tests.MockCluster;
using StreamLogit.Pipeline;

namespace StreamLogit.Kafka.Tests.Runs;

/// <summary>What a running worker does when the cluster misbehaves. What the mock cluster cannot show stands in DEVELOPERS.md.</summary>
public sealed class FaultTests : IDisposable
{
    private readonly KafkaMockRoom _room = new(brokers: 3);

    public FaultTests()
    {
        _room.Cluster.CreateTopic("tickets", 2);
        _room.Cluster.CreateTopic("scores", 2);
        _room.Cluster.CreateTopic("rejects", 1);
    }

    public void Dispose() => _room.Dispose();

    private LiveWorker Start(bool isExactlyOnce = false, string instance = "main", TimeSpan? giveUpAfter = null) =>
        new(_room.Cluster, KafkaMockRoom.Source("scorer", "tickets") with { Instance = instance }, isExactlyOnce, giveUpAfter);

    private void Produce(int first, int count)
    {
        string[] events = [.. LiveWorker.Events(first, count)];
        _room.Produce("tickets", 0, events[..(count / 2)]);
        _room.Produce("tickets", 1, events[(count / 2)..]);
    }

    private void AssertAllScored(int events, bool areOnce = true)
    {
        var ids = LiveWorker.Ids(_room.ReadAll("scores")).ToList();
        var expected = Enumerable.Range(0, events).Select(i => $"e-{i}").Order(StringComparer.Ordinal);
        Assert.Equal(expected, (areOnce ? ids : ids.Distinct()).Order(StringComparer.Ordinal));
    }

    // At least once only: the mock cluster forgets transactions when its brokers go or move, which says nothing of a real one.
    [Fact]
    public async Task Brokers_AwayForAWhile_WorkerWaitsAndGoesOn()
    {
        await using var worker = Start();
        Produce(0, 500);
        await worker.UntilRecordsAsync(500);
        _room.Cluster.TakeAway();
        await worker.UntilAsync("it says that the brokers are away", () => worker.Log.Has(101));
        _room.Cluster.BringBack();
        Produce(500, 500);
        await worker.UntilRecordsAsync(1000);
        await worker.StopAsync();

        Assert.True(worker.Log.Has(102), "It does not say that they are back.");
        AssertAllScored(1000);
    }

    [Fact]
    public async Task Brokers_StayAway_WorkerGivesUp()
    {
        await using var worker = Start(giveUpAfter: TimeSpan.FromSeconds(2));
        Produce(0, 100);
        await worker.UntilRecordsAsync(100);
        _room.Cluster.TakeAway();

        var error = await Assert.ThrowsAsync<PipelineException>(worker.EndAsync);
        Assert.StartsWith("No Kafka broker could be reached for ", error.Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData(false)]
    [InlineData(true)]
    public async Task Brokers_Slow_WorkerIsSlowToo(bool isExactlyOnce)
    {
        await using var worker = Start(isExactlyOnce);
        _room.Cluster.SetRoundTrip(TimeSpan.FromMilliseconds(150));
        Produce(0, 1000);
        await worker.UntilRecordsAsync(1000);
        _room.Cluster.SetRoundTrip(TimeSpan.Zero);
        await worker.StopAsync();

        AssertAllScored(1000);
    }

    // At least once only: the mock cluster forgets transactions when its brokers go or move, which says nothing of a real one.
    [Fact]
    public async Task CoordinatorAndLeaders_Moved_AreFollowed()
    {
        await using var worker = Start();
        Produce(0, 400);
        await worker.UntilRecordsAsync(400);
        for (int broker = 1; broker <= 3; broker++)
        {
            _room.Cluster.MoveCoordinator("scorer", broker);
            _room.Cluster.MoveLeader("tickets", 0, broker);
            _room.Cluster.MoveLeader("scores", 1, broker);
            Produce(broker * 400, 400);
            await worker.UntilRecordsAsync((broker + 1) * 400);
        }
        await worker.StopAsync();

        AssertAllScored(1600);
    }

    [Theory]
    [InlineData(false)]
    [InlineData(true)]
    public async Task Requests_FailForAMoment_AreRepeated(bool isExactlyOnce)
    {
        await using var worker = Start(isExactlyOnce);
        Produce(0, 400);
        await worker.UntilRecordsAsync(400);
        _room.Cluster.FailNext(ApiKey.Fetch, ErrorCode.NotLeaderForPartition, ErrorCode.UnknownTopicOrPart, ErrorCode.KafkaStorageError);
        _room.Cluster.FailNext(ApiKey.Produce, ErrorCode.NotEnoughReplicas, ErrorCode.RequestTimedOut);
        _room.Cluster.FailNext(ApiKey.OffsetCommit, ErrorCode.GroupCoordinatorNotAvailable, ErrorCode.NotCoordinatorForGroup);
        _room.Cluster.FailNext(ApiKey.TxnOffsetCommit, ErrorCode.GroupLoadInProgress, ErrorCode.NotCoordinatorForGroup);
        _room.Cluster.FailNext(ApiKey.EndTxn, ErrorCode.GroupCoordinatorNotAvailable, ErrorCode.ConcurrentTransactions);
        Produce(400, 400);
        await worker.UntilRecordsAsync(800);
        await worker.StopAsync();

        AssertAllScored(800, areOnce: false);
    }

    [Fact]
    public async Task Producer_Fenced_WorkerEndsAndSaysSo()
    {
        await using var worker = Start(isExactlyOnce: true);
        Produce(0, 200);
        await worker.UntilRecordsAsync(200);
        _room.Cluster.FailNext(ApiKey.AddPartitionsToTxn, ErrorCode.ProducerFenced);
        Produce(200, 200);

        var error = await Assert.ThrowsAsync<PipelineException>(worker.EndAsync);
        Assert.StartsWith("Another worker of the same group and instance has taken over", error.Message, StringComparison.Ordinal);
    }

    // At least once only: the mock cluster forgets transactions when its brokers go or move, which says nothing of a real one.
    [Fact]
    public async Task Group_AnotherWorkerJoinsAndLeaves_EveryEventIsScored()
    {
        await using var first = Start(instance: "a");
        Produce(0, 400);
        await first.UntilRecordsAsync(400);
        await using (var second = Start(instance: "b"))
        {
            await second.UntilAsync("the second has a partition", () => second.Log.Has(104));
            Produce(400, 400);
            await second.UntilAsync("the second has scored", () => second.Run.Progress.Records >= 200);
            await second.StopAsync();
        }
        Produce(800, 400);
        await first.UntilAsync("all scored", () => LiveWorker.Ids(_room.ReadAll("scores")).Distinct().Count() >= 1200);
        await first.StopAsync();

        Assert.True(first.Log.Has(105) || first.Log.Has(106), $"It does not say that a partition went:\n{string.Join('\n', first.Log.Lines)}");
        AssertAllScored(1200, areOnce: false);
    }

    [Fact]
    public async Task Messages_Poisoned_GoToTheRejectsWithTheirPlace()
    {
        await using var worker = Start();
        _room.Produce("tickets", 1, ["not json", "", "\u00ff\u00fe", """{"id":"e-0","time":"2026-03-01T08:15:30Z"}""", """{"id":5e999}"""]);
        await worker.UntilRecordsAsync(5);
        await worker.StopAsync();

        AssertAllScored(1);
        Assert.Equal(
            ["tickets-1@0", "tickets-1@1", "tickets-1@2", "tickets-1@4"],
            _room.ReadAll("rejects").Select(reject => reject.Message.Value.Split('"')[3]));
    }

    [Fact]
    public async Task Topic_Missing_WorkerWaitsForIt()
    {
        _room.Cluster.SetTopicError("tickets", ErrorCode.UnknownTopicOrPart);
        await using var worker = Start();
        await worker.UntilAsync("it says that the topic is missing", () => worker.Log.Has(108));
        _room.Cluster.SetTopicError("tickets", ErrorCode.NoError);
        Produce(0, 100);
        await worker.UntilRecordsAsync(100);
        await worker.StopAsync();

        AssertAllScored(100);
    }

    [Fact]
    public async Task Topic_StaysMissing_WorkerGivesUp()
    {
        _room.Cluster.SetTopicError("tickets", ErrorCode.UnknownTopicOrPart);
        await using var worker = Start(giveUpAfter: TimeSpan.FromSeconds(2));

        var error = await Assert.ThrowsAsync<PipelineException>(worker.EndAsync);
        Assert.Contains("Make the topic, or correct its name.", error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Topic_NotAllowed_WorkerEndsAndSaysSo()
    {
        Produce(0, 10);
        _room.Cluster.FailNext(ApiKey.Fetch, [.. Enumerable.Repeat(ErrorCode.TopicAuthorizationFailed, 20)]);
        await using var worker = Start();

        var error = await Assert.ThrowsAsync<PipelineException>(worker.EndAsync);
        Assert.StartsWith("The Kafka brokers do not let this worker read tickets", error.Message, StringComparison.Ordinal);
    }
}
