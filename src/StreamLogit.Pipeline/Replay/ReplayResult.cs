using StreamLogit.Engine.Health;
using StreamLogit.Engine.Learning;

namespace StreamLogit.Pipeline.Replay;

/// <summary>What a replay gave.</summary>
/// <param name="Health">How the probabilities did over the whole replay.</param>
/// <param name="ScoreHash">The <see cref="Replay.ScoreHash"/> of all scores.</param>
/// <param name="Model">The coefficients at the end.</param>
/// <param name="IsComplete">Whether the recordings were replayed to their end; else it covers what was replayed before it was stopped.</param>
public sealed record ReplayResult(HealthSnapshot Health, string ScoreHash, ModelSnapshot Model, bool IsComplete)
{
    /// <summary>Whether labels taught at once because nothing says when they became known: in truth, then, the probabilities would have been worse.</summary>
    public bool IsOptimistic => Health.TaughtAtOnce > 0;
}
