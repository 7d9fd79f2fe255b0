using Confluent.Kafka;

namespace StreamLogit.Kafka.Tests.Log;

/// <summary>One process with its clients of the test's log: it can die at a step, or have a call fail there.</summary>
internal sealed class LogProcess(TransactionalLog log, int seed, LogStep? step = null, LogFault fault = LogFault.Death)
{
    private readonly Dictionary<string, int> _calls = [];

    public TransactionalLog Log => log;

    /// <summary>Mixes partitions, another way in each process.</summary>
    public Random Random { get; } = new(seed);

    public bool IsDead { get; private set; }

    /// <summary>Whether the step was reached.</summary>
    public bool WasReached { get; private set; }

    /// <summary>Partitions that go to another worker at a call of the consumer, by the number of the call, and come back twenty calls later.</summary>
    public Dictionary<int, int> Revocations { get; } = [];

    /// <summary>What happens elsewhere before a call.</summary>
    public Dictionary<(string Client, int Number), Action> Meanwhile { get; } = [];

    /// <summary>Carries out a call, if it is not its fate to fail.</summary>
    public object? Call(string client, string method, Func<object?> call)
    {
        lock (log.Lock)
        {
            ThrowIfDead();
            int number = _calls[client] = _calls.GetValueOrDefault(client) + 1;
            if (Meanwhile.Remove((client, number), out var happening)) happening();
            Meet(new LogStep(client, number, IsAfter: false), method);
            object? result = call();
            Meet(new LogStep(client, number, IsAfter: true), method);
            return result;
        }
    }

    public void ThrowIfDead()
    {
        if (IsDead) throw new DeathException();
    }

    private void Meet(LogStep at, string method)
    {
        if (at != step || WasReached) return;
        bool isTransactional = method is "InitTransactions" or "SendOffsetsToTransaction" or "CommitTransaction" or "AbortTransaction";
        switch (fault)
        {
            case LogFault.Death:
                WasReached = true;
                IsDead = true;
                throw new DeathException();
            case LogFault.Retriable when isTransactional:
                WasReached = true;
                throw new KafkaRetriableException(new Error(ErrorCode.Local_TimedOut, "the answer did not come in time"));
            case LogFault.AbortRequired when method is "SendOffsetsToTransaction" || (method is "CommitTransaction" && !at.IsAfter):
                WasReached = true;
                throw new KafkaTxnRequiresAbortException(new Error(ErrorCode.Local_State, "the transaction must be taken back"));
            case LogFault.Fatal when isTransactional || method is "Produce":
                WasReached = true;
                var error = new Error(ErrorCode.OutOfOrderSequenceNumber, "a message was lost from sight", isFatal: true);
                throw method is "Produce" ? new ProduceException<byte[], byte[]>(error, new DeliveryResult<byte[], byte[]>()) : new KafkaException(error);
            default:
                // Another call than those that can fail so: the step counts as tried.
                WasReached = true;
                break;
        }
    }
}
