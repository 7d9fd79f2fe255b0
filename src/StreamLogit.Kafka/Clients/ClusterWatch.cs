using Confluent.Kafka;
using Microsoft.Extensions.Logging;
using StreamLogit.Pipeline;

namespace StreamLogit.Kafka.Clients;

/// <summary>
/// Watches whether the cluster can be reached, by what all clients of a worker tell. They go on by themselves for as long as they live; this says when to
/// give up. Threads of all clients call it.
/// </summary>
internal sealed class ClusterWatch(TimeSpan giveUpAfter, TimeProvider time, ILogger logger)
{
    // While no broker can be reached, the client tries, and tells of it, more often than this.
    private static readonly TimeSpan Silence = TimeSpan.FromSeconds(20);

    private readonly Lock _lock = new();
    private long _awaySince;
    private long _lastAway;
    private string _reason = "";
    private string? _refusal;
    private bool _wasReached;
    private volatile bool _isAway;

    /// <summary>Whether no broker can be reached, as far as is known.</summary>
    public bool IsAway => _isAway;

    /// <summary>Hears of an error.</summary>
    public void OnError(Error error)
    {
        KafkaInstruments.Errors.Add(1, new KeyValuePair<string, object?>("error.type", error.Code.ToString()));
        logger.ClientError(error.Code.ToString(), error.Reason);
        if (error.Code == ErrorCode.Local_MaxPollExceeded) logger.PolledTooLate();
        lock (_lock)
        {
            if (error.Code is ErrorCode.Local_Authentication or ErrorCode.SaslAuthenticationFailed)
            {
                if (_refusal is null) logger.AuthenticationRefused(error.Reason);
                _refusal = error.Reason;
                Away(error.Reason);
            }
            else if (error.Code is ErrorCode.Local_AllBrokersDown or ErrorCode.Local_Resolve) Away(error.Reason);
            else if (_isAway && error.Code is ErrorCode.Local_Transport) Away(error.Reason);
        }
    }

    /// <summary>Hears of a line of a client's log.</summary>
    public void OnLog(LogMessage message) => logger.ClientSays(message.Facility, message.Message);

    /// <summary>Hears that a broker answered. Called for every message, so that it costs nothing in good times.</summary>
    public void OnAnswer()
    {
        if (_isAway || !_wasReached) Answered();
    }

    /// <summary>Throws where the brokers were out of reach for too long, or refuse the credentials and never took them.</summary>
    /// <exception cref="PipelineException">It is time to give up.</exception>
    public void ThrowIfGivenUp()
    {
        if (!_isAway) return;
        lock (_lock)
        {
            if (!_isAway) return;
            if (_refusal is not null && !_wasReached) throw new PipelineException($"The Kafka brokers refuse the credentials: {_refusal}");
            if (time.GetElapsedTime(_lastAway) > Silence)
            {
                Back();
                return;
            }
            var away = time.GetElapsedTime(_awaySince);
            if (away > giveUpAfter) throw new PipelineException($"No Kafka broker could be reached for {away.TotalSeconds:F0} s ({_reason}). All up to the last commit is kept.");
        }
    }

    private void Away(string reason)
    {
        _lastAway = time.GetTimestamp();
        _reason = reason;
        if (_isAway) return;
        _awaySince = _lastAway;
        _isAway = true;
        KafkaInstruments.Outages.Add(1);
        logger.BrokersAway(reason, giveUpAfter);
    }

    private void Answered()
    {
        lock (_lock)
        {
            _wasReached = true;
            _refusal = null;
            if (_isAway) Back();
        }
    }

    private void Back()
    {
        logger.BrokersBack(time.GetElapsedTime(_awaySince).TotalSeconds);
        _isAway = false;
    }
}
