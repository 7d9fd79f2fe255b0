using System.Collections.Immutable;

namespace StreamLogit.Engine.Health;

/// <summary>What is known about the published probabilities at one moment. Immutable; safe to read from any thread.</summary>
public sealed record HealthSnapshot
{
    /// <summary>The stream's clock: the highest time seen, in microseconds since 1970, or null before the first record.</summary>
    public long? ClockMicroseconds { get; init; }

    /// <summary>Records seen, of every kind.</summary>
    public long Records { get; init; }

    /// <summary>Events scored.</summary>
    public long Events { get; init; }

    /// <summary>Labels learned.</summary>
    public long Labelled { get; init; }

    /// <summary>Records rejected.</summary>
    public long Rejected { get; init; }

    /// <summary>Rejects by the code of their reason; reasons that did not occur are left out.</summary>
    public ImmutableSortedDictionary<string, long> RejectsByReason { get; init; } = ImmutableSortedDictionary<string, long>.Empty;

    /// <summary>Events scored whose label is not known yet.</summary>
    public long Awaiting { get; init; }

    /// <summary>Events whose wait ended without a label.</summary>
    public long Expired { get; init; }

    /// <summary>Events one of whose categories has its slot from another value.</summary>
    public long CollidedEvents { get; init; }

    /// <summary>The figures over all labels.</summary>
    public required HealthFigures Total { get; init; }

    /// <summary>The figures over windows of the stream's clock, and over the last labels.</summary>
    public ImmutableArray<WindowFigures> Windows { get; init; } = [];

    /// <summary>The figures of every setting of the bank, in its order.</summary>
    public ImmutableArray<SettingFigures> Settings { get; init; } = [];
}

/// <summary>Figures of the published probabilities over some labels; every mean is weighted by the records' weights and NaN without any.</summary>
/// <param name="Count">Labels.</param>
/// <param name="Weight">The sum of their weights.</param>
/// <param name="LogLoss">Mean -ln of the probability that was published for what happened, in nats.</param>
/// <param name="BaseRateLogLoss">The same for the Krichevsky-Trofimov predictor, which knows only how often labels were 1 so far.</param>
/// <param name="Brier">Mean (p - y)^2 (Brier 1950, for two classes), 0 to 1.</param>
/// <param name="MeanProbability">Mean published probability.</param>
/// <param name="ObservedRate">Share of labels that are 1.</param>
public sealed record HealthFigures(
    long Count, double Weight, double LogLoss, double BaseRateLogLoss, double Brier, double MeanProbability, double ObservedRate);

/// <summary>Figures over a window.</summary>
/// <param name="Name">The window as the definition writes it, or <c>last 10000 labels</c>.</param>
/// <param name="Figures">Its figures.</param>
public sealed record WindowFigures(string Name, HealthFigures Figures);

/// <summary>Figures of a setting of the bank, had it been published.</summary>
/// <param name="Name">The setting.</param>
/// <param name="LogLoss">Its mean log-loss in nats.</param>
/// <param name="Brier">Its mean Brier score.</param>
/// <param name="BlendWeight">Its present weight in the blend, 0 to 1.</param>
public sealed record SettingFigures(string Name, double LogLoss, double Brier, double BlendWeight);
