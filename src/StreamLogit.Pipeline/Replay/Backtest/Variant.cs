using StreamLogit.Pipeline.Definition;

namespace StreamLogit.Pipeline.Replay.Backtest;

/// <summary>A definition that is tried.</summary>
/// <param name="Name">What reports call it: its overrides.</param>
/// <param name="Definition">The definition with them.</param>
public sealed record Variant(string Name, StreamDefinition Definition);
