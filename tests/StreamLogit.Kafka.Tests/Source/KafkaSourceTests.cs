using StreamLogit.Engine.Records;
using StreamLogit.Kafka.Source;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Options.Kafka;

namespace StreamLogit.Kafka.Tests.Source;

public sealed class KafkaSourceTests(KafkaMockRoom room) : IClassFixture<KafkaMockRoom>
{
    private string NewTopic(int partitions, string what = "tickets")
    {
        string topic = room.NewName(what);
        room.Cluster.CreateTopic(topic, partitions);
        return topic;
    }

    private KafkaSource Open(KafkaSourceOptions options, OutputKind outputs = OutputKind.Files, int maximumBytes = 1000) => new(options, room.Connect(), maximumBytes, outputs);

    /// <summary>Reads up to an offset, however many messages come at once.</summary>
    private static async Task TakeToAsync(KafkaSource source, long offset)
    {
        var batch = Schemas.NewBatch();
        long at = source.Position.Origins is [var origin] ? origin.Offset : 0;
        while (at < offset)
        {
            await TakenRecord.FillAsync(source, batch, (int)(offset - at));
            at = source.Position.Origins[0].Offset;
        }
    }

    private static async Task<List<(string Origin, long Offset, string Text)>> TakeAsync(KafkaSource source)
    {
        var taken = new List<(string, long, string)>();
        var batch = Schemas.NewBatch();
        while (await TakenRecord.FillAsync(source, batch, 100) == FillOutcome.Filled)
        {
            int record = 0;
            foreach (var one in TakenRecord.Of(batch)) taken.Add((batch.OriginOf(record++), one.Number, one.Text));
        }
        return taken;
    }

    [Fact]
    public async Task Fill_SeveralPartitionsAndALabelTopic_GivesEachInItsOrder()
    {
        string events = NewTopic(3), labels = NewTopic(2, "labels");
        for (int partition = 0; partition < 3; partition++) room.Produce(events, partition, Enumerable.Range(0, 50).Select(i => $"e{partition}-{i}"));
        for (int partition = 0; partition < 2; partition++) room.Produce(labels, partition, Enumerable.Range(0, 50).Select(i => $"l{partition}-{i}"));
        using var source = Open(KafkaMockRoom.Source(room.NewName("group"), events) with { LabelTopic = labels });

        var taken = await TakeAsync(source);

        Assert.Equal(250, taken.Count);
        for (int partition = 0; partition < 3; partition++)
            Assert.Equal(Enumerable.Range(0, 50).Select(i => ((long)i, $"e{partition}-{i}")), taken.Where(one => one.Origin == $"{events}-{partition}@").Select(one => (one.Offset, one.Text)));
        Assert.Equal(100, taken.Count(one => one.Origin.StartsWith(labels, StringComparison.Ordinal)));
        Assert.Equal(5, source.Position.Origins.Length);
        Assert.All(source.Position.Origins, origin => Assert.Equal(50, origin.Offset));
    }

    [Theory]
    [InlineData(TopicPlace.Earliest, 10)]
    [InlineData(TopicPlace.Committed, 10)]
    [InlineData(TopicPlace.Latest, 0)]
    public async Task Fill_NothingKnown_BeginsWhereTheDefinitionSays(TopicPlace place, int expected)
    {
        string topic = NewTopic(1);
        room.Produce(topic, 0, Enumerable.Range(0, 10).Select(i => $"{i}"));
        using var source = Open(KafkaMockRoom.Source(room.NewName("group"), topic) with { Start = new TopicStart(place) });

        Assert.Equal(expected, (await TakeAsync(source)).Count);
        Assert.Equal(10, Assert.Single(source.Position.Origins).Offset);
    }

    [Fact]
    public async Task Committed_ThenANewSource_GoesOnThere()
    {
        string topic = NewTopic(1);
        room.Produce(topic, 0, Enumerable.Range(0, 10).Select(i => $"{i}"));
        var options = KafkaMockRoom.Source(room.NewName("group"), topic);
        using (var first = Open(options))
        {
            await TakeToAsync(first, 4);
            first.Committed(first.Position);
        }
        using var second = Open(options);

        Assert.Equal(["4", "5", "6", "7", "8", "9"], (await TakeAsync(second)).Select(one => one.Text));
    }

    // Files are cut back to an older state, and want what the group has committed since; scores in a topic stay there.
    [Theory]
    [InlineData(OutputKind.Files, 2)]
    [InlineData(OutputKind.Topics, 8)]
    public async Task Seek_OlderThanTheGroup_GoesBackOnlyWhereOutputsDo(object outputs, int expected)
    {
        string topic = NewTopic(1);
        room.Produce(topic, 0, Enumerable.Range(0, 10).Select(i => $"{i}"));
        var options = KafkaMockRoom.Source(room.NewName("group"), topic);
        var old = SourcePosition.Start;
        using (var first = Open(options))
        {
            await TakeToAsync(first, 2);
            old = first.Position;
            await TakeToAsync(first, 8);
            first.Committed(first.Position);
        }
        using var second = Open(options, (OutputKind)outputs);
        second.Seek(old);

        Assert.Equal(expected, (await TakeAsync(second))[0].Offset);
    }

    [Fact]
    public async Task Fill_MessageTooLongOrEmpty_IsARecordLikeAnother()
    {
        string topic = NewTopic(1);
        room.Produce(topic, 0, ["", new string('x', 2000), "{}"]);
        using var source = Open(KafkaMockRoom.Source(room.NewName("group"), topic));

        var taken = await TakenRecord.TakeToEndAsync(source);

        Assert.Equal(["", new string('x', 1000), "{}"], taken.Select(one => one.Text));
        Assert.Equal((RejectReason.TooLong, "2000 bytes; at most 1000 are allowed"), (taken[1].Reason, taken[1].Detail));
    }

    [Fact]
    public void Seek_PositionOfAFile_Throws()
    {
        using var source = Open(KafkaMockRoom.Source(room.NewName("group"), NewTopic(1)));

        Assert.Throws<PipelineException>(() => source.Seek(new SourcePosition([new OriginPosition("quay.jsonl", 5, 1, 0)])));
    }

    [Fact]
    public async Task Fill_OffsetIsGone_ThrowsAndSaysWhatToDo()
    {
        string topic = NewTopic(1);
        room.Produce(topic, 0, ["a"]);
        using var source = Open(KafkaMockRoom.Source(room.NewName("group"), topic));
        source.Seek(new SourcePosition([new OriginPosition($"{topic}-0@", 5000, 4999, 0)]));

        var error = await Assert.ThrowsAsync<PipelineException>(() => TakenRecord.TakeToEndAsync(source));
        Assert.StartsWith("What the worker is to read next is not in Kafka any more", error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Fill_TooLateForTheGroup_SaysSoAndJoinsAgain()
    {
        string topic = NewTopic(1);
        room.Produce(topic, 0, ["a"]);
        var options = KafkaMockRoom.Source(room.NewName("group"), topic);
        var connection = room.Connect();
        using var source = new KafkaSource(options with { UntilEnd = false, Properties = options.Properties.Add("max.poll.interval.ms", "1200") }, connection, 1000, OutputKind.Files);
        await TakeToAsync(source, 1);

        // The clock is the client's own.
        await Task.Delay(TimeSpan.FromSeconds(3), TestContext.Current.CancellationToken);
        room.Produce(topic, 0, ["b"]);
        await TakeToAsync(source, 2);

        Assert.True(room.Log.Has(109), string.Join('\n', room.Log.Lines));
    }
}
