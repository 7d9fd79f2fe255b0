using System.Globalization;
using Confluent.Kafka;
using StreamLogit.Pipeline;

namespace StreamLogit.Kafka.Source;

/// <summary>How far a partition has been read.</summary>
internal sealed class PartitionCursor(string topic, int partition)
{
    /// <summary>In place of an offset that is not known yet.</summary>
    public const long Unknown = -1;

    // Positions read as topic-partition@offset.
    private const char Mark = '@';

    /// <summary>The partition.</summary>
    public TopicPartition Partition { get; } = new(topic, partition);

    /// <summary>Its name, as positions begin with it.</summary>
    public string Origin { get; } = string.Create(CultureInfo.InvariantCulture, $"{topic}-{partition}{Mark}");

    /// <summary>The offset from which it goes on, or <see cref="Unknown"/>.</summary>
    public long Next { get; set; } = Unknown;

    /// <summary>From where it was read when it was assigned last.</summary>
    public long Start { get; set; } = Unknown;

    /// <summary>Up to where records were given since then, those that were given again aside.</summary>
    public long Given { get; set; } = Unknown;

    /// <summary>Whether it is this worker's.</summary>
    public bool IsAssigned { get; set; }

    /// <summary>Whether everything that was there has been read.</summary>
    public bool IsAtEnd { get; set; }

    /// <summary>Whether it was assigned before in this run, so that what was read since by others must not be read again.</summary>
    public bool WasAssigned { get; set; }

    /// <summary>How far it has been read.</summary>
    public OriginPosition Position => new(Origin, Next, Math.Max(0, Next - 1), 0);

    /// <summary>Goes back to where its reading began, before a state says where it goes on.</summary>
    public void Rewind()
    {
        Next = Start;
        Given = Start;
    }

    /// <summary>The partition of an origin.</summary>
    /// <exception cref="PipelineException">It is no partition.</exception>
    public static TopicPartition Parse(string origin)
    {
        int dash = origin.LastIndexOf('-');
        if (dash > 0 && origin.EndsWith(Mark) && int.TryParse(origin.AsSpan(dash + 1, origin.Length - dash - 2), NumberStyles.None, CultureInfo.InvariantCulture, out int partition))
            return new TopicPartition(origin[..dash], partition);
        throw new PipelineException($"The state has read {origin}, which is no partition of a topic: begin with a new state folder.");
    }
}
