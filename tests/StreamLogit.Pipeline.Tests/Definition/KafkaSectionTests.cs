using StreamLogit.Pipeline.Options.Kafka;

namespace StreamLogit.Pipeline.Tests.Definition;

public sealed class KafkaSectionTests
{
    private const string Cluster = "\"kafka\": { \"servers\": \"a:1\" }, ";

    [Theory]
    [InlineData("\"kafka\": {}", "kafka: the key \"servers\" is missing: it names brokers, as \"broker-1:9092,broker-2:9092\"")]
    [InlineData("\"kafka\": { \"servers\": \"a:1\", \"properties\": { \"sasl.password\": \"hush\" } }", "kafka.properties[\"sasl.password\"]: is a secret, and a definition is no place for one: name an environment variable or a file in kafka.secrets")]
    [InlineData("\"kafka\": { \"servers\": \"a:1\", \"properties\": { \"group.id\": \"g\" } }", "kafka.properties[\"group.id\"]: is set by the program itself: leave it away")]
    [InlineData("\"kafka\": { \"servers\": \"a:1\", \"properties\": { \"debug\": [] } }", "kafka.properties.debug: expected a string, a number, true or false, found a list")]
    [InlineData("\"kafka\": { \"servers\": \"a:1\", \"secrets\": { \"debug\": { \"file\": \"f\" } } }", "kafka.secrets.debug: is no secret: write it among the properties")]
    [InlineData("\"kafka\": { \"servers\": \"a:1\", \"secrets\": { \"sasl.password\": \"hush\" } }", "kafka.secrets[\"sasl.password\"]: expected { \"environment\": name } or { \"file\": file }, which say where the secret is found")]
    [InlineData("\"kafka\": { \"servers\": \"a:1\", \"giveUpAfter\": \"10ms\" }", "kafka.giveUpAfter: expected a duration from 1s to 1w, written as a number followed by ms, s, m, h, d or w, as \"90m\" or \"30d\", found the string \"10ms\"")]
    [InlineData("\"source\": { \"kafka\": { \"topics\": \"t\" } }", "the key \"kafka\" is missing: it names the cluster of the topics")]
    [InlineData(Cluster + "\"source\": { \"kafka\": {} }", "source.kafka: the key \"topics\" is missing: it names the topic of the events, or a list of topics")]
    [InlineData(Cluster + "\"source\": { \"kafka\": { \"topics\": \"a b\" } }", "source.kafka.topics: expected the name of a topic: letters, digits, dots, underscores and dashes, at most 249 of them, found the string \"a b\"")]
    [InlineData(Cluster + "\"source\": { \"kafka\": { \"topics\": [ \"a\", \"a\" ] } }", "source.kafka.topics[1]: the topic \"a\" is there twice: keep one")]
    [InlineData(Cluster + "\"source\": { \"kafka\": { \"topics\": \"a\", \"labelTopic\": \"a\" } }", "source.kafka.labelTopic: is among the topics already: leave it away")]
    [InlineData(Cluster + "\"source\": { \"kafka\": { \"topics\": \"a\", \"start\": \"2026-03-01T08:15:30\" } }", "source.kafka.start: expected one of \"committed\", \"earliest\", \"latest\", or a time with an offset, as \"2026-03-01T08:15:30Z\", found the string \"2026-03-01T08:15:30\"")]
    [InlineData(Cluster + "\"source\": { \"file\": \"a.csv\", \"kafka\": { \"topics\": \"a\" } }", "source: has both \"file\" and \"kafka\": records come from one place")]
    [InlineData(Cluster + "\"source\": { \"kafka\": { \"topics\": \"a\" }, \"follow\": true }", "source.follow: is about files, and topics are always followed: leave it away")]
    [InlineData(Cluster + "\"scores\": { \"kafka\": {} }", "scores.kafka: the key \"topic\" is missing: it names the topic that scores are written to")]
    [InlineData(Cluster + "\"scores\": { \"kafka\": { \"topic\": \"t\", \"delivery\": \"once\" } }", "scores.kafka.delivery: expected one of \"exactly-once\", \"at-least-once\", found the string \"once\"")]
    [InlineData(Cluster + "\"source\": { \"file\": \"a.csv\" }, \"scores\": { \"kafka\": { \"topic\": \"t\", \"delivery\": \"exactly-once\" } }", "scores.kafka.delivery: commits the offsets of topics with the scores, and the source is a file: say \"at-least-once\"")]
    [InlineData(Cluster + "\"scores\": { \"kafka\": { \"topic\": \"t\", \"every\": \"1m\" } }", "scores.kafka.every: expected a duration from 1ms to 10s, written as a number followed by ms, s, m, h, d or w, as \"90m\" or \"30d\", found the string \"1m\"")]
    [InlineData(Cluster + "\"scores\": { \"kafka\": { \"topic\": \"t\", \"everyEvents\": 0 } }", "scores.kafka.everyEvents: expected a whole number from 1 to 1000000, found the number 0")]
    [InlineData(Cluster + "\"scores\": { \"file\": \"s\", \"kafka\": { \"topic\": \"t\" } }", "scores: has both \"file\" and \"kafka\": scores are written to one place")]
    [InlineData(Cluster + "\"scores\": { \"kafka\": { \"topic\": \"t\", \"key\": \"card\" } }", "scores.kafka.key: no feature reads the field \"card\" as a category: name one that is read, or the id")]
    [InlineData(Cluster + "\"rejects\": { \"file\": \"r\", \"kafka\": { \"topic\": \"t\" } }", "rejects: has both \"file\" and \"kafka\": rejects are written to one place")]
    public void Kafka_Wrong_IsRefused(string keys, string expected)
    {
        var error = Definitions.ErrorWith(keys);

        Assert.Equal(expected, error.Path.Length == 0 ? error.Message : $"{error.Path}: {error.Message}");
        Assert.DoesNotContain("hush", error.ToString(), StringComparison.Ordinal);
    }

    [Fact]
    public void Kafka_LeftOut_HasItsDefaults()
    {
        var definition = Definitions.ReadWith(Cluster + "\"source\": { \"kafka\": { \"topics\": \"tickets\" } }, \"scores\": { \"kafka\": { \"topic\": \"scores\", \"key\": \"id\" } }");

        var source = Assert.IsType<KafkaSourceOptions>(definition.Source);
        Assert.Equal(["tickets"], source.AllTopics);
        Assert.Equal(("quay", "main", TopicStart.Committed, false), (source.Group, source.Instance, source.Start, source.UntilEnd));
        var scores = Assert.IsType<TopicOutputOptions>(definition.Scores);
        Assert.Equal(("scores", null), (scores.Topic, scores.KeyField));
        Assert.Empty(scores.Properties);
        Assert.Equal((true, TimeSpan.FromMilliseconds(100), 10_000), (scores.IsExactlyOnce, scores.EveryTime, scores.EveryEvents));
    }

    [Fact]
    public void Kafka_Given_IsRead()
    {
        var definition = Definitions.ReadWith(
            """
            "kafka": { "servers": "a:1,b:2", "properties": { "log_level": 3, "socket.keepalive.enable": true, "ssl.ca.location": "ca" }, "secrets": { "ssl.key.password": { "file": "k" } }, "giveUpAfter": "5s" },
            "source": { "kafka": { "topics": ["a", "b"], "labelTopic": "c", "group": "g", "instance": "i", "start": "2026-03-01T08:15:30.5+01:00", "properties": { "fetch.wait.max.ms": 10 } } }
            """);

        Assert.Equal("3 true ca", string.Join(' ', new[] { "log_level", "socket.keepalive.enable", "ssl.ca.location" }.Select(name => definition.Kafka!.Properties[name])));
        Assert.True(definition.Kafka!.Secrets["ssl.key.password"].IsFile);
        Assert.Equal(TimeSpan.FromSeconds(5), definition.Kafka.GiveUpAfter);
        var source = (KafkaSourceOptions)definition.Source!;
        Assert.Equal(["a", "b", "c"], source.AllTopics);
        Assert.Equal(new TopicStart(TopicPlace.Time, 1772349330500), source.Start);
        Assert.Equal("10", source.Properties["fetch.wait.max.ms"]);
    }
}
