using Confluent.Kafka;
using StreamLogit.Kafka.Clients;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Options.Kafka;

namespace StreamLogit.Kafka.Source;

/// <summary>Finds where the reading of partitions begins.</summary>
internal sealed class StartOffsets(TopicStart start, ClusterWatch watch, TimeProvider time)
{
    // A coordinator that moves, or a broker that restarts, answers within this. Longer than this no rebalance should be held up.
    private static readonly TimeSpan AskFor = TimeSpan.FromSeconds(60);
    private static readonly TimeSpan AnswerWithin = TimeSpan.FromSeconds(5);

    /// <summary>Where the group stands in partitions; <see cref="PartitionCursor.Unknown"/> where it has not begun.</summary>
    /// <exception cref="PipelineException">The brokers do not say.</exception>
    public Dictionary<TopicPartition, long> Committed(IConsumer<Ignore, int> consumer, IReadOnlyCollection<TopicPartition> partitions)
    {
        if (partitions.Count == 0) return [];
        return Ask("where the group stands", () => consumer.Committed(partitions, AnswerWithin))
            .ToDictionary(found => found.TopicPartition, found => found.Offset.IsSpecial ? PartitionCursor.Unknown : found.Offset.Value);
    }

    /// <summary>Where the reading of a partition begins that no state knows.</summary>
    /// <exception cref="PipelineException">The brokers do not say.</exception>
    public long First(IConsumer<Ignore, int> consumer, TopicPartition partition, long committed)
    {
        if (start.Place == TopicPlace.Committed && committed != PartitionCursor.Unknown) return committed;
        var ends = Ask($"where {partition.Topic} begins and ends", () => consumer.QueryWatermarkOffsets(partition, AnswerWithin));
        if (start.Place == TopicPlace.Latest) return ends.High.Value;
        if (start.Place != TopicPlace.Time) return ends.Low.Value;
        var found = Ask($"what {partition.Topic} holds from a time on", () =>
            consumer.OffsetsForTimes([new TopicPartitionTimestamp(partition, new Timestamp(start.TimeMilliseconds, TimestampType.CreateTime))], AnswerWithin));
        return found[0].Offset.IsSpecial ? ends.High.Value : found[0].Offset.Value;
    }

    /// <summary>Whether all topics are there.</summary>
    public static bool AreThere(IConsumer<Ignore, int> consumer, IEnumerable<string> topics)
    {
        try
        {
            foreach (string topic in topics) consumer.QueryWatermarkOffsets(new TopicPartition(topic, 0), AnswerWithin);
            return true;
        }
        catch (KafkaException)
        {
            return false;
        }
    }

    private T Ask<T>(string what, Func<T> ask)
    {
        long began = time.GetTimestamp();
        while (true)
        {
            try
            {
                return ask();
            }
            catch (KafkaException e) when (!e.Error.IsFatal)
            {
                watch.OnError(e.Error);
                watch.ThrowIfGivenUp();
                if (time.GetElapsedTime(began) > AskFor)
                    throw new PipelineException($"The Kafka brokers do not say {what}: {e.Error.Reason}", e);
                Thread.Sleep(100);
            }
        }
    }
}
