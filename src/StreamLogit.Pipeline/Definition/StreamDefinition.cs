using StreamLogit.Engine.Definition;
using StreamLogit.Pipeline.Options;
using StreamLogit.Pipeline.Options.Kafka;

namespace StreamLogit.Pipeline.Definition;

/// <summary>A stream definition that has been checked: what the engine computes, where records come from and where results go.</summary>
public sealed record StreamDefinition
{
    /// <summary>What the engine computes.</summary>
    public required EngineDefinition Engine { get; init; }

    /// <summary>Where the records come from, or null where the definition does not say.</summary>
    public SourceOptions? Source { get; init; }

    /// <summary>The file of the warm start, or null where the definition names none.</summary>
    public string? WarmStartPath { get; init; }

    /// <summary>The Kafka cluster, or null where the definition names none.</summary>
    public KafkaOptions? Kafka { get; init; }

    /// <summary>Where scores are written, or null where the definition does not say.</summary>
    public OutputOptions? Scores { get; init; }

    /// <summary>Where rejects are written, or null where they are only counted.</summary>
    public OutputOptions? Rejects { get; init; }

    /// <summary>Where every record is recorded as the engine takes it, or null where it is not.</summary>
    public RecordingOptions? Recording { get; init; }

    /// <summary>Where the state is kept and how often it is committed, or null where the definition does not say.</summary>
    public StateOptions? State { get; init; }

    /// <summary>Where the worker serves its page, or null where it serves none.</summary>
    public ListenOptions? Listen { get; init; }

    /// <summary>Where changes of alarms are sent, or null where they are only logged and shown.</summary>
    public WebhookOptions? Webhook { get; init; }

    /// <summary>The definition as it was used, overrides included, without comments: JSON, indented.</summary>
    public required string EffectiveJson { get; init; }
}
