using StreamLogit.Engine.Health;

namespace StreamLogit.Pipeline.Replay.Backtest;

/// <summary>What one definition gave.</summary>
/// <param name="Name">The definition.</param>
/// <param name="EffectiveJson">The definition as it was used.</param>
/// <param name="Health">How its probabilities did over all its labels.</param>
/// <param name="ScoreHash">The <see cref="Replay.ScoreHash"/> of its scores.</param>
/// <param name="Decisions">Its decisions and its reliability over the labels compared.</param>
public sealed record LaneResult(string Name, string EffectiveJson, HealthSnapshot Health, string ScoreHash, DecisionFigures Decisions);
