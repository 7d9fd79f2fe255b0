using System.Collections.Immutable;
using Microsoft.Extensions.Logging;
using StreamLogit.Kafka.Clients;
using StreamLogit.Kafka.Output;
using StreamLogit.Kafka.Source;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Options.Kafka;

namespace StreamLogit.Kafka;

/// <summary>Opens the ends of streams: topics, and files where the definition names those.</summary>
public static class KafkaEnds
{
    /// <summary>The meter that counts what the ends of streams meet with.</summary>
    public const string MeterName = "StreamLogit.Kafka";

    /// <summary>Opens source and outputs as the definition names them.</summary>
    /// <exception cref="KafkaSettingsException">The settings are wrong.</exception>
    /// <exception cref="PipelineException">A file is out of reach.</exception>
    public static StreamEnds Open(StreamDefinition definition, TimeProvider time, ILogger log) => Open(definition, time, log, new KafkaClients());

    /// <summary>Opens the source alone, as one that takes no part in the worker's group, for who wants all its records from the beginning.</summary>
    /// <exception cref="KafkaSettingsException">The settings are wrong.</exception>
    /// <exception cref="PipelineException">A file is out of reach.</exception>
    public static IRecordSource OpenSource(StreamDefinition definition, TimeProvider time, ILogger log)
    {
        if (definition.Source is not KafkaSourceOptions source) return StreamEnds.OpenSource(definition, time);
        source = source with { Group = $"{source.Group}-record", Start = new TopicStart(TopicPlace.Earliest) };
        return new KafkaSource(source, Connect(definition, time, log, new KafkaClients()), definition.Engine.Record.MaximumBytes, OutputKind.Files);
    }

    /// <summary>Opens the topics of the source for writing.</summary>
    /// <exception cref="KafkaSettingsException">The settings are wrong.</exception>
    public static IScoreSink OpenRecordSink(StreamDefinition definition, TimeProvider time, ILogger log) =>
        OpenRecordSink(definition, time, log, new KafkaClients());

    internal static IScoreSink OpenRecordSink(StreamDefinition definition, TimeProvider time, ILogger log, KafkaClients clients)
    {
        var source = definition.Source as KafkaSourceOptions ?? throw new ArgumentException("The source of the definition is no topic.", nameof(definition));
        return new RecordTopic(source, CreateWriter(Connect(definition, time, log, clients), ImmutableSortedDictionary<string, string>.Empty));
    }

    internal static StreamEnds Open(StreamDefinition definition, TimeProvider time, ILogger log, KafkaClients clients)
    {
        if (definition.Kafka is null) return StreamEnds.OfFiles(definition, time);
        var connection = Connect(definition, time, log, clients);
        var topics = definition.Source as KafkaSourceOptions;
        var scores = definition.Scores as TopicOutputOptions;
        bool isTransactional = topics is not null && scores is { IsExactlyOnce: true };
        var sinks = ImmutableArray.CreateBuilder<IScoreSink>();
        KafkaSource? source = null;
        try
        {
            TopicWriter? writer = null;
            if (isTransactional)
            {
                var config = connection.Settings.Transactional(scores!.Properties, $"{topics!.Group}.{topics.Instance}");
                writer = new TransactionalWriter(connection, config);
            }
            else if ((scores ?? definition.Rejects as TopicOutputOptions) is { } output) writer = CreateWriter(connection, output.Properties);
            if (scores is not null) sinks.Add(new ScoreTopic(scores, definition.Engine, writer!));
            if (definition.Rejects is TopicOutputOptions rejects) sinks.Add(new RejectTopic(rejects, writer!));
            sinks.AddRange(StreamEnds.OpenSinks(definition));
            if (topics is null) return new StreamEnds(StreamEnds.OpenSource(definition, time), sinks.ToImmutable());
            var outputs = isTransactional ? OutputKind.Transactions : scores is not null ? OutputKind.Topics : OutputKind.Files;
            source = new KafkaSource(topics, connection, definition.Engine.Record.MaximumBytes, outputs);
            if (!isTransactional) return new StreamEnds(source, sinks.ToImmutable());
            var transaction = new KafkaTransaction(source, (TransactionalWriter)writer!, log);
            source.Gone = transaction.OnGone;
            return new StreamEnds(source, sinks.ToImmutable(), transaction);
        }
        catch
        {
            source?.Dispose();
            foreach (var sink in sinks) sink.Dispose();
            throw;
        }
    }

    private static TopicWriter CreateWriter(KafkaConnection connection, ImmutableSortedDictionary<string, string> properties) =>
        new(connection, connection.Settings.Producer(properties));

    private static KafkaConnection Connect(StreamDefinition definition, TimeProvider time, ILogger log, KafkaClients clients)
    {
        var kafka = definition.Kafka ?? throw new ArgumentException("The definition names no Kafka cluster.", nameof(definition));
        return new KafkaConnection(new ClientSettings(kafka), clients, time, log);
    }
}
