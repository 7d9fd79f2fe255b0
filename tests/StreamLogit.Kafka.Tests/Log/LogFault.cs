namespace StreamLogit.Kafka.Tests.Log;

/// <summary>What happens at a step.</summary>
internal enum LogFault
{
    /// <summary>The process dies.</summary>
    Death,

    /// <summary>The client says that the call may be repeated.</summary>
    Retriable,

    /// <summary>The client says that the transaction must be taken back.</summary>
    AbortRequired,

    /// <summary>The client is of no use any more.</summary>
    Fatal,
}
