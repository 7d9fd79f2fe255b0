using System.Collections.Immutable;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Replay.Backtest;

/// <summary>What a backtest tries and against what it compares.</summary>
public sealed record BacktestOptions
{
    /// <summary>The definition as it stands, with which all is compared.</summary>
    public required Variant Reference { get; init; }

    /// <summary>What is tried, at most 1,000. Default: nothing.</summary>
    public ImmutableArray<Variant> Variants { get; init; } = [];

    /// <summary>The path of a field in which events carry somebody else's probability, or null.</summary>
    public string? RivalField { get; init; }

    /// <summary>Whether the base rate and a nightly refit are compared too. Default false.</summary>
    public bool Baselines { get; init; }

    /// <summary>Where the scores of the definition as it stands are written, or null. A file that is there is written anew.</summary>
    public FileOutputOptions? Scores { get; init; }

    /// <summary>The only records that are taken, by their times. Null, the default, takes all.</summary>
    public RecordSpan? Span { get; init; }

    /// <summary>The seed of the bootstrap. Default 1.</summary>
    public ulong Seed { get; init; } = 1;

    /// <summary>The most memory for engines, in bytes; more variants than fit take further passes over the recordings. Null: half of what there is.</summary>
    public long? MemoryBytes { get; init; }
}
