namespace StreamLogit.Engine.Decisions;

/// <summary>One feature's part in a score.</summary>
/// <param name="Feature">The place of the feature in the definition.</param>
/// <param name="Contribution">
/// What it adds to the log-odds: the sum over its entries of coefficient (value - the value's running mean before this event).
/// </param>
/// <param name="Figure">What the feature's <see cref="Definition.FeatureOptions.Words"/> say it with; meaningless where it has none.</param>
public readonly record struct Reason(int Feature, double Contribution, double Figure = 0);
