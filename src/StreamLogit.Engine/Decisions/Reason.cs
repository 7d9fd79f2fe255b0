namespace StreamLogit.Engine.Decisions;

/// <summary>One feature's part in a score.</summary>
/// <param name="Feature">The place of the feature in the definition.</param>
/// <param name="Contribution">
/// What it adds to the log-odds: the sum over its entries of coefficient (value - the value's running mean before this event).
/// </param>
public readonly record struct Reason(int Feature, double Contribution);
