using StreamLogit.Kafka.Clients;
using StreamLogit.Pipeline;

namespace StreamLogit.Kafka.Source;

/// <summary>Waits for a topic that is not there, or not there any more, and says when to give up.</summary>
internal sealed class TopicPatience(KafkaConnection connection)
{
    private long? _missingSince;

    /// <summary>Hears that a message came.</summary>
    public void OnMessage() => _missingSince = null;

    /// <summary>Hears that a topic is missing.</summary>
    /// <exception cref="PipelineException">It has been missing for too long.</exception>
    public void OnMissing(string reason)
    {
        var giveUpAfter = connection.Settings.Options.GiveUpAfter;
        if (_missingSince is not { } since)
        {
            _missingSince = connection.Time.GetTimestamp();
            KafkaInstruments.TopicsMissing.Add(1);
            connection.Log.TopicMissing(reason, giveUpAfter);
        }
        else if (connection.Time.GetElapsedTime(since) > giveUpAfter) throw new PipelineException($"{reason}, for {giveUpAfter} by now. Make the topic, or correct its name.");
    }
}
