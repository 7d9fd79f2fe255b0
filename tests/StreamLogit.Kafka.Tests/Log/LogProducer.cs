using System.Reflection;
using Confluent.Kafka;

namespace StreamLogit.Kafka.Tests.Log;

/// <summary>A producer of the test's log with transactions: those calls of the client that a worker makes.</summary>
#pragma warning disable CA1852 // The proxy that is made at run time derives from it.
internal class LogProducer : DispatchProxy
#pragma warning restore CA1852
{
    private LogProcess _process = null!;
    private string _name = "";
    private string _group = "";
    private int _epoch;
    private bool _mustAbort;
    private bool _wasCommitted; // by a call whose answer was lost

    public static IProducer<byte[], byte[]> Create(LogProcess process, ProducerConfig config, string group)
    {
        var producer = Create<IProducer<byte[], byte[]>, LogProducer>();
        var proxy = (LogProducer)(object)producer;
        (proxy._process, proxy._name, proxy._group) = (process, config.TransactionalId, group);
        return producer;
    }

    protected override object? Invoke(MethodInfo? targetMethod, object?[]? args)
    {
        string method = targetMethod!.Name;
        if (method == "Dispose") return null;
        try
        {
            return _process.Call("producer", method, () => Carry(method, args!));
        }
        catch (KafkaTxnRequiresAbortException)
        {
            _mustAbort = true;
            throw;
        }
    }

    private object? Carry(string method, object?[] args)
    {
        var log = _process.Log;
        if (method == "InitTransactions")
        {
            if (_epoch == 0 || !log.IsOwner(_name, _epoch)) _epoch = log.Own(_name);
            return null;
        }
        if (!log.IsOwner(_name, _epoch)) throw Fenced(method);
        if (_mustAbort && method != "AbortTransaction") throw new KafkaTxnRequiresAbortException(new Error(ErrorCode.Local_State, "the transaction must be taken back"));
        switch (method)
        {
            case "BeginTransaction":
                if (log.Open(_name) is not null) throw new InvalidOperationException("A transaction is open.");
                _wasCommitted = false;
                log.Begin(_name);
                return null;
            case "Produce":
                var message = (Message<byte[], byte[]>)args[1]!;
                log.Append(log.Open(_name)!, ((TopicPartition)args[0]!).Topic, message.Key?.ToArray(), [.. message.Value]);
                return null;
            case "SendOffsetsToTransaction":
                foreach (var offset in (IEnumerable<TopicPartitionOffset>)args[0]!) log.Open(_name)!.Offsets[(_group, offset.Topic, offset.Partition.Value)] = offset.Offset.Value;
                return null;
            case "CommitTransaction":
                if (log.Open(_name) is not null) log.End(_name, isCommitted: true);
                else if (!_wasCommitted) throw new InvalidOperationException("No transaction is open.");
                _wasCommitted = true;
                return null;
            case "AbortTransaction":
                if (log.Open(_name) is not null) log.End(_name, isCommitted: false);
                _mustAbort = false;
                return null;
            default:
                throw new NotSupportedException($"The test's log knows no {method} of a producer.");
        }
    }

    private static KafkaException Fenced(string method)
    {
        var error = new Error(ErrorCode.Local_Fenced, "a newer producer has the name", isFatal: true);
        return method == "Produce" ? new ProduceException<byte[], byte[]>(error, new DeliveryResult<byte[], byte[]>()) : new KafkaException(error);
    }
}
