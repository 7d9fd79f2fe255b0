using System.Reflection;
using Confluent.Kafka;
using StreamLogit.Kafka.Clients;

namespace StreamLogit.Kafka.Tests.Log;

/// <summary>A consumer of the test's log: those calls of the client that a worker makes.</summary>
#pragma warning disable CA1852 // The proxy that is made at run time derives from it.
internal class LogConsumer : DispatchProxy
#pragma warning restore CA1852
{
    private readonly Dictionary<TopicPartition, long> _positions = [];
    private readonly HashSet<TopicPartition> _paused = [];
    private readonly HashSet<TopicPartition> _atEnd = [];
    private readonly List<(int Call, TopicPartition Partition)> _returning = [];
    private LogProcess _process = null!;
    private ConsumerConfig _config = null!;
    private MessageBuffer _buffer = null!;
    private ConsumerEvents _events = null!;
    private List<string>? _subscribed;
    private TopicPartition? _current;
    private int _left; // messages until another partition has its turn
    private int _polls;

    public static IConsumer<Ignore, int> Create(LogProcess process, ConsumerConfig config, MessageBuffer buffer, ConsumerEvents events)
    {
        var consumer = Create<IConsumer<Ignore, int>, LogConsumer>();
        var proxy = (LogConsumer)(object)consumer;
        (proxy._process, proxy._config, proxy._buffer, proxy._events) = (process, config, buffer, events);
        return consumer;
    }

    protected override object? Invoke(MethodInfo? targetMethod, object?[]? args)
    {
        string method = targetMethod!.Name;
        // What a dead process leaves behind nobody closes.
        if (method is "Dispose" or "Close") return null;
        if (method == "Consume") Poll();
        return _process.Call("consumer", method, () => Carry(method, args!));
    }

    private object? Carry(string method, object?[] args)
    {
        switch (method)
        {
            case "Subscribe":
                _subscribed = [.. (IEnumerable<string>)args[0]!];
                return null;
            case "Assign":
                foreach (var start in (IEnumerable<TopicPartitionOffset>)args[0]!) _positions[start.TopicPartition] = start.Offset.Value;
                return null;
            case "Consume":
                return Consume();
            case "Seek":
                var target = (TopicPartitionOffset)args[0]!;
                _positions[target.TopicPartition] = target.Offset.Value;
                _atEnd.Remove(target.TopicPartition);
                return null;
            case "Pause":
                _paused.UnionWith((IEnumerable<TopicPartition>)args[0]!);
                return null;
            case "Resume":
                _paused.ExceptWith((IEnumerable<TopicPartition>)args[0]!);
                return null;
            case "get_Assignment":
                return _positions.Keys.ToList();
            case "get_ConsumerGroupMetadata":
                return new LogGroup();
            case "Committed":
                return ((IEnumerable<TopicPartition>)args[0]!).Select(partition => new TopicPartitionOffset(
                    partition, _process.Log.Committed.TryGetValue((_config.GroupId, partition.Topic, partition.Partition.Value), out long offset) ? offset : Offset.Unset)).ToList();
            case "QueryWatermarkOffsets":
                var asked = (TopicPartition)args[0]!;
                return new WatermarkOffsets(0, _process.Log.End(asked.Topic, asked.Partition.Value));
            default:
                throw new NotSupportedException($"The test's log knows no {method} of a consumer.");
        }
    }

    /// <summary>Assigns and takes away partitions, which the client does within Consume, without the log's lock: handlers call the client.</summary>
    private void Poll()
    {
        _process.ThrowIfDead();
        if (_subscribed is null) return;
        _polls++;
        if (_polls == 1)
        {
            Assign([.. _subscribed.SelectMany(topic => _process.Log.PartitionsOf(topic).Select(partition => new TopicPartition(topic, partition)))]);
            return;
        }
        if (_process.Revocations.Remove(_polls, out int number) && _positions.Keys.FirstOrDefault(partition => partition.Partition.Value == number) is { } gone)
        {
            _events.Revoked([new TopicPartitionOffset(gone, _positions[gone])]);
            _positions.Remove(gone);
            _returning.Add((_polls + 20, gone));
        }
        foreach (var (_, partition) in _returning.Where(one => one.Call == _polls).ToList()) Assign([partition]);
    }

    private void Assign(IReadOnlyList<TopicPartition> partitions)
    {
        foreach (var start in _events.Assigned(partitions))
        {
            _positions[start.TopicPartition] = start.Offset.Value;
            _atEnd.Remove(start.TopicPartition);
        }
    }

    private ConsumeResult<Ignore, int>? Consume()
    {
        // Runs of several messages of a partition, then of another.
        if (_left-- <= 0 || _current is null || !CanGive(_current))
        {
            var ready = _positions.Keys.Where(CanGive).OrderBy(partition => partition.ToString(), StringComparer.Ordinal).ToList();
            _current = ready.Count == 0 ? null : ready[_process.Random.Next(ready.Count)];
            _left = _process.Random.Next(6);
        }
        if (_current is { } partition)
        {
            var (message, offset) = _process.Log.Next(partition.Topic, partition.Partition.Value, _positions[partition]);
            _positions[partition] = offset + 1;
            return new ConsumeResult<Ignore, int>
            {
                TopicPartitionOffset = new TopicPartitionOffset(partition, offset),
                Message = new Message<Ignore, int> { Value = _buffer.Deserialize(message!.Value, false, SerializationContext.Empty) },
            };
        }
        if (_config.EnablePartitionEof != true || _positions.Keys.FirstOrDefault(one => !_paused.Contains(one) && !_atEnd.Contains(one)) is not { } ended) return null;
        _atEnd.Add(ended);
        return new ConsumeResult<Ignore, int> { TopicPartitionOffset = new TopicPartitionOffset(ended, _positions[ended]), IsPartitionEOF = true };
    }

    private bool CanGive(TopicPartition partition) =>
        _positions.TryGetValue(partition, out long position) && !_paused.Contains(partition) && _process.Log.Next(partition.Topic, partition.Partition.Value, position).Message is not null;

    private sealed class LogGroup : IConsumerGroupMetadata;
}
