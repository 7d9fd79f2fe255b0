using System.Globalization;
using System.Text;
using StreamLogit.Kafka.Output;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Options.Kafka;

namespace StreamLogit.Kafka.Tests.Output;

public sealed class ScoreTopicTests(KafkaMockRoom room) : ScoreSinkContract, IClassFixture<KafkaMockRoom>
{
    private string _topic = "";

    private protected override int FlushEvery => 250;

    private protected override IScoreSink Open() => Open(new TopicOutputOptions(NewTopic()));

    private protected override string Written(IScoreSink sink) => string.Join('\n', room.ReadAll(_topic).Select(message => message.Message.Value));

    private protected override void Clear() { }

    private string NewTopic()
    {
        _topic = room.NewName("scores");
        room.Cluster.CreateTopic(_topic, 1);
        return _topic;
    }

    private ScoreTopic Open(TopicOutputOptions options)
    {
        var connection = room.Connect();
        return new ScoreTopic(options, Schemas.Definition, new TopicWriter(connection, connection.Settings.Producer(options.Properties)));
    }

    [Fact]
    public void Write_Batch_OneMessageAScore()
    {
        using var sink = Open();
        sink.Start(5);
        ScoredBatch.Create(8, 4).WriteTo(sink);

        Assert.Equal(5 + 2, sink.Flush());
        var messages = room.ReadAll(_topic);
        Assert.Equal(["t-9", "t-10"], messages.Select(message => message.Message.Key));
        Assert.All(messages, message =>
        {
            string id = message.Message.Key!;
            Assert.StartsWith($$"""{"id":"{{id}}","time":"2026-03-01T08:15:30""", message.Message.Value, StringComparison.Ordinal);
            Assert.Equal(DateTimeOffset.Parse("2026-03-01T08:15:30Z", CultureInfo.InvariantCulture).ToUnixTimeMilliseconds(), message.Message.Timestamp.UnixTimestampMs);
            Assert.Equal("application/json", Encoding.UTF8.GetString(message.Message.Headers.GetLastBytes("content-type")));
            Assert.Equal(id[2..], Encoding.UTF8.GetString(message.Message.Headers.GetLastBytes("model-version")));
        });
    }

    [Fact]
    public void Write_ChosenKey_IsTheFieldOfTheEvent()
    {
        using var sink = Open(new TopicOutputOptions(NewTopic()) { KeyField = "country" });
        sink.Start(null);
        var batch = ScoredBatch.Of(
            Schemas.Definition, 1, """{"id":"a","time":"2026-03-01T08:15:30Z","country":"QX"}""", """{"id":"b","time":"2026-03-01T08:15:30Z"}""");
        for (int i = 0; i < 2; i++) batch.Scores.Add(out _).Record = i;
        batch.WriteTo(sink);
        sink.Flush();

        Assert.Equal(["QX", null], room.ReadAll(_topic).Select(message => message.Message.Key));
    }

    [Fact]
    public void Write_LargerThanTheClientSends_ThrowsAndSaysWhatToDo()
    {
        var small = new TopicOutputOptions(NewTopic()) { Properties = System.Collections.Immutable.ImmutableSortedDictionary<string, string>.Empty.Add("message.max.bytes", "1000") };
        using var sink = Open(small);
        sink.Start(null);
        var batch = ScoredBatch.Of(Schemas.Definition, 1, $$"""{"id":"{{new string('a', 2000)}}","time":"2026-03-01T08:15:30Z"}""");
        batch.Scores.Add(out _).Record = 0;

        Assert.StartsWith("A message is larger than Kafka takes", Assert.Throws<PipelineException>(() => batch.WriteTo(sink)).Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Flush_BrokerFindsAMessageTooLarge_Throws()
    {
        using var sink = Open();
        sink.Start(null);
        room.Cluster.FailNext(MockCluster.ApiKey.Produce, Confluent.Kafka.ErrorCode.MsgSizeTooLarge);
        ScoredBatch.Create(1, 1).WriteTo(sink);

        Assert.StartsWith("A message is larger than Kafka takes", Assert.Throws<PipelineException>(() => sink.Flush()).Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Write_QueueIsFull_WaitsAndLosesNothing()
    {
        const int Records = 3000;
        var small = new TopicOutputOptions(NewTopic()) { Properties = System.Collections.Immutable.ImmutableSortedDictionary<string, string>.Empty.Add("queue.buffering.max.messages", "10") };
        using var sink = Open(small);
        sink.Start(null);
        ScoredBatch.Create(1, Records).WriteTo(sink);

        long written = sink.Flush();
        Assert.True(room.Log.Has(110));
        Assert.Equal(2000, written);
        Assert.Equal(written, room.ReadAll(_topic).Count);
    }

    [Fact]
    public void Flush_BrokersStayAway_GivesUpWithinTheTime()
    {
        using var alone = new KafkaMockRoom();
        alone.Cluster.CreateTopic("scores", 1);
        var connection = alone.Connect(TimeSpan.FromSeconds(2));
        using var sink = new ScoreTopic(new TopicOutputOptions("scores"), Schemas.Definition, new TopicWriter(connection, connection.Settings.Producer(new TopicOutputOptions("scores").Properties)));
        sink.Start(null);
        ScoredBatch.Create(1, 1).WriteTo(sink);
        sink.Flush();
        alone.Cluster.TakeAway();
        ScoredBatch.Create(2, 2).WriteTo(sink);

        var error = Assert.Throws<PipelineException>(() => sink.Flush());
        Assert.Contains("All up to the last commit is kept", error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Flush_BrokersComeBack_DeliversAll()
    {
        using var alone = new KafkaMockRoom();
        alone.Cluster.CreateTopic("scores", 1);
        var connection = alone.Connect();
        using var sink = new ScoreTopic(new TopicOutputOptions("scores"), Schemas.Definition, new TopicWriter(connection, connection.Settings.Producer(new TopicOutputOptions("scores").Properties)));
        sink.Start(null);
        ScoredBatch.Create(1, 1).WriteTo(sink);
        sink.Flush();
        alone.Cluster.TakeAway();
        ScoredBatch.Create(2, 5).WriteTo(sink);
        alone.Cluster.BringBack();

        Assert.Equal(4, sink.Flush());
        Assert.Equal(4, alone.ReadAll("scores").Count);
    }
}
