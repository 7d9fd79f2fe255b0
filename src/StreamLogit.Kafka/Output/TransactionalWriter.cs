using System.Collections.Immutable;
using Confluent.Kafka;
using StreamLogit.Kafka.Clients;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Transactions;

namespace StreamLogit.Kafka.Output;

/// <summary>Writes messages to topics in transactions, which commit the offsets of a consumer with them.</summary>
internal sealed class TransactionalWriter(KafkaConnection connection, ProducerConfig config) : TopicWriter(connection, config)
{
    // A call that takes longer is repeated, and in between one looks whether it is time to give up.
    private static readonly TimeSpan CallSlice = TimeSpan.FromSeconds(10);
    private static readonly TimeSpan Pause = TimeSpan.FromMilliseconds(50);

    private readonly ProducerConfig _config = config;
    private const int MostAttempts = 5;

    private bool _isUsed;
    private bool _isOpen;

    /// <summary>Begins with a new client, which ends what an earlier one of its name has left open, whatever process that was in.</summary>
    /// <exception cref="PipelineException">The brokers cannot be reached.</exception>
    public void Recover()
    {
        for (int attempt = 1; ; attempt++)
        {
            if (_isUsed) Replace(_config);
            _isUsed = true;
            _isOpen = false;
            try
            {
                Call(() => Producer.InitTransactions(CallSlice));
                return;
            }
            catch (RewindException e)
            {
                if (attempt == MostAttempts) throw new PipelineException($"Kafka lets no transaction begin: {e.Message}", e);
                Thread.Sleep(Pause);
            }
        }
    }

    /// <summary>Commits what was written since the last commit, and how far a consumer has read.</summary>
    /// <exception cref="RewindException">It was taken back, or nobody knows.</exception>
    /// <exception cref="PipelineException">Another worker has taken over, or the brokers cannot be reached.</exception>
    public void Commit(ImmutableArray<TopicPartitionOffset> offsets, Func<IConsumerGroupMetadata> group)
    {
        BeforeWrite();
        Call(() => Producer.SendOffsetsToTransaction(offsets, group(), CallSlice));
        Call(() => Producer.CommitTransaction(CallSlice));
        _isOpen = false;
        KafkaInstruments.Transactions.Add(1);
    }

    /// <summary>Takes back what was written since the last commit.</summary>
    /// <exception cref="PipelineException">Another worker has taken over, or the brokers cannot be reached.</exception>
    public void Abort()
    {
        if (_isOpen) Call(() => Producer.AbortTransaction(CallSlice));
        _isOpen = false;
    }

    /// <summary>What was committed is with the brokers, and the rest is nobody's business yet.</summary>
    public override void Flush() { }

    /// <inheritdoc/>
    protected override void BeforeWrite()
    {
        if (_isOpen) return;
        Call(Producer.BeginTransaction);
        _isOpen = true;
    }

    /// <inheritdoc/>
    protected override PipelineException Failed(Error error) => IsOfThisWorkerAlone(error)
        ? new RewindException($"Kafka did not take a message: {error.Reason}")
        : IsFenced(error) ? Fenced(error) : base.Failed(error);

    private static bool IsOfThisWorkerAlone(Error error) => !IsFenced(error)
        && (error.IsFatal || error.Code is ErrorCode.Local_State or ErrorCode.Local_PurgeQueue or ErrorCode.Local_PurgeInflight or ErrorCode.Local_MsgTimedOut);

    private static bool IsFenced(Error error) => error.Code is
        ErrorCode.Local_Fenced or ErrorCode.ProducerFenced or ErrorCode.InvalidProducerEpoch or ErrorCode.FencedInstanceId or ErrorCode.TransactionCoordinatorFenced;

    private static PipelineException Fenced(Error error) => new(
        $"Another worker of the same group and instance has taken over, or a transaction lasted longer than transaction.timeout.ms; this worker publishes nothing more ({error.Reason}).");

    private void Call(Action call)
    {
        long since = Connection.Time.GetTimestamp();
        while (true)
        {
            try
            {
                call();
                return;
            }
            catch (KafkaRetriableException e)
            {
                Connection.Watch.OnError(e.Error);
                WaitSince(since);
                Thread.Sleep(Pause);
            }
            catch (KafkaTxnRequiresAbortException e)
            {
                KafkaInstruments.Aborts.Add(1);
                throw new RewindException($"Kafka took a transaction back: {e.Error.Reason}", e);
            }
            catch (KafkaException e) when (IsFenced(e.Error))
            {
                throw Fenced(e.Error);
            }
            catch (KafkaException e) when (e.Error.Code is ErrorCode.TransactionalIdAuthorizationFailed or ErrorCode.GroupAuthorizationFailed or ErrorCode.TopicAuthorizationFailed)
            {
                throw new PipelineException($"The Kafka brokers do not let this worker write in transactions: {e.Error.Reason}", e);
            }
            catch (KafkaException e)
            {
                // Nobody knows what became of the transaction: a new client asks.
                throw new RewindException($"A transaction could not be committed: {e.Error.Reason}", e);
            }
        }
    }
}
