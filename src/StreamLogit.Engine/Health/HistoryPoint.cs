using System.Collections.Immutable;

namespace StreamLogit.Engine.Health;

/// <summary>A minute, hour or day of the past in which something happened.</summary>
/// <param name="FromMicroseconds">When it starts, in microseconds since 1970.</param>
/// <param name="LengthMicroseconds">How long it is. Minutes with fewer than eight records stand together, up to five; in slices such are still said to be one.</param>
/// <param name="Figures">The labels that came in it.</param>
/// <param name="Stream">What happened on the stream; null in slices.</param>
/// <param name="Settings">The settings of the bank, with their mean weight in the blend; empty in slices.</param>
public sealed record HistoryPoint(
    long FromMicroseconds, long LengthMicroseconds, HealthFigures Figures, StreamFigures? Stream, ImmutableArray<SettingFigures> Settings);
