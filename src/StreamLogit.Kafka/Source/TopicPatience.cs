using StreamLogit.Kafka.Clients;
using StreamLogit.Pipeline;

namespace StreamLogit.Kafka.Source;

/// <summary>Waits for a topic that is not there, or not there any more, and says when to give up.</summary>
internal sealed class TopicPatience(KafkaConnection connection)
{
    private long? _missingSince;
    private string _reason = "";

    /// <summary>Hears that a message came, or that partitions were assigned.</summary>
    public void OnThere() => _missingSince = null;

    /// <summary>Looks, where nothing comes, whether the topic has been missing for too long. The client tells only once that it is.</summary>
    /// <param name="isThere">Asks whether it is there by now.</param>
    /// <exception cref="PipelineException">It has.</exception>
    public void ThrowIfGivenUp(Func<bool> isThere)
    {
        if (_missingSince is not { } since || connection.Time.GetElapsedTime(since) <= connection.Settings.Options.GiveUpAfter) return;
        if (!isThere()) throw new PipelineException($"{_reason}, for {connection.Settings.Options.GiveUpAfter} by now. Make the topic, or correct its name.");
        _missingSince = null;
    }

    /// <summary>Hears that a topic is missing.</summary>
    public void OnMissing(string reason)
    {
        if (_missingSince is not null) return;
        _missingSince = connection.Time.GetTimestamp();
        _reason = reason;
        KafkaInstruments.TopicsMissing.Add(1);
        connection.Log.TopicMissing(reason, connection.Settings.Options.GiveUpAfter);
    }
}
