using StreamLogit.Kafka.Clients;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Kafka.Tests.Output;

public sealed class RecordTopicTests(KafkaMockRoom room) : IClassFixture<KafkaMockRoom>, IDisposable
{
    private readonly TemporaryFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    private async Task<string> PublishAsync(string topic, string? labelTopic, double? speed, TimeProvider time, params string[] lines)
    {
        string path = _folder.Write("recording.jsonl", string.Concat(lines.Select(line => line + "\n")));
        var definition = new StreamDefinition
        {
            Engine = Schemas.Definition, Kafka = room.Options(), EffectiveJson = "{}", Source = KafkaMockRoom.Source("unused", topic) with { LabelTopic = labelTopic },
        };
        var source = FileSource.Open(new FileSourceOptions(path, RecordingFormat.JsonLines), 1000, TimeProvider.System);
        using var run = new CopyRun(definition, source, KafkaEnds.OpenRecordSink(definition, TimeProvider.System, room.Log, new KafkaClients()), speed, time);
        Assert.Equal(lines.Length, await run.RunAsync(TestContext.Current.CancellationToken));
        return path;
    }

    private string NewTopic(string what)
    {
        string topic = room.NewName(what);
        room.Cluster.CreateTopic(topic, 4);
        return topic;
    }

    [Fact]
    public async Task Publish_EventsAndLabels_AreKeyedByTheirIdsAndCarryTheirTimes()
    {
        string topic = NewTopic("tickets");
        string[] lines =
        [
            """{"id":"a","time":"2026-03-01T08:15:30Z","amount":1}""", """{"id":"b","time":"2026-03-01T08:15:31Z","amount":1}""",
            """{"id":"a","time":"2026-03-02T08:15:30Z","label":1}""", """{"id":""",
        ];
        await PublishAsync(topic, null, null, TimeProvider.System, lines);

        var messages = room.ReadAll(topic);
        Assert.Equal(lines.Order(), messages.Select(message => message.Message.Value).Order());
        Assert.Equal([null, "a", "a", "b"], messages.Select(message => message.Message.Key).Order());
        var ofA = messages.Where(message => message.Message.Key == "a").ToList();
        Assert.Single(ofA.Select(message => message.Partition).Distinct());
        Assert.Equal(lines[0], ofA[0].Message.Value);
        Assert.Equal(1772352930000, ofA[0].Message.Timestamp.UnixTimestampMs);
    }

    [Fact]
    public async Task Publish_LabelTopic_TakesTheLabels()
    {
        string topic = NewTopic("tickets"), labels = NewTopic("labels");
        await PublishAsync(
            topic, labels, null, TimeProvider.System, """{"id":"a","time":"2026-03-01T08:15:30Z","amount":1}""", """{"id":"a","time":"2026-03-02T08:15:30Z","label":1}""");

        Assert.Contains("amount", Assert.Single(room.ReadAll(topic)).Message.Value, StringComparison.Ordinal);
        Assert.Contains("label", Assert.Single(room.ReadAll(labels)).Message.Value, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Publish_Speed_TakesTheTimeOfTheRecordsDividedByIt()
    {
        var time = new JumpingTime();
        await PublishAsync(
            NewTopic("tickets"), null, 60, time, """{"id":"a","time":"2026-03-01T08:00:00Z","amount":1}""", """{"id":"b","time":"2026-03-01T09:00:00Z","amount":1}""");

        Assert.InRange(time.Elapsed.TotalSeconds, 59.9, 60.1);
    }
}
