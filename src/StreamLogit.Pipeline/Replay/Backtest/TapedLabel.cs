namespace StreamLogit.Pipeline.Replay.Backtest;

/// <summary>What an engine had published for an event whose label has become known.</summary>
internal readonly record struct TapedLabel(
    ulong IdHash, double LogOdds, int Label, double Weight, long ScoredAtMicroseconds, long KnownAtMicroseconds);
