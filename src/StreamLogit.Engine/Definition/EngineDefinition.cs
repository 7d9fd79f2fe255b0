using System.Collections.Immutable;

namespace StreamLogit.Engine.Definition;

/// <summary>
/// All that decides what the engine computes: the part of a stream definition that knows no files, brokers or hosts.
/// Two engines with equal definitions that see the same records give the same bits.
/// </summary>
/// <remarks>The values are taken as checked: whoever builds this record from text reports what is wrong with the text.</remarks>
public sealed record EngineDefinition
{
    /// <summary>The name of the stream.</summary>
    public required string Stream { get; init; }

    /// <summary>Where the id, the time, the label and the weight stand in a record.</summary>
    public required RecordOptions Record { get; init; }

    /// <summary>The features, in the order in which they are encoded and summed.</summary>
    public required ImmutableArray<FeatureOptions> Features { get; init; }

    /// <summary>The room for histories.</summary>
    public HistoryOptions Histories { get; init; } = new();

    /// <summary>The bank of settings and what of it is published.</summary>
    public LearningOptions Learning { get; init; } = new();

    /// <summary>How long an event waits for its label.</summary>
    public LabelOptions Labels { get; init; } = new();

    /// <summary>From which probability a decision is an alert, and how many reasons it is given.</summary>
    public DecisionOptions Decision { get; init; } = new();

    /// <summary>Over which windows health is reported.</summary>
    public HealthOptions Health { get; init; } = new();
}
