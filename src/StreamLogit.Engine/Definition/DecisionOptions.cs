namespace StreamLogit.Engine.Definition;

/// <summary>How a probability becomes a decision.</summary>
public sealed record DecisionOptions
{
    /// <summary>The probability from which on the decision is <c>alert</c>, 0 to 1. Default 0.5.</summary>
    public double Cutoff { get; init; } = 0.5;

    /// <summary>How many reasons a score carries, 0 to 20. Default 3.</summary>
    public int Reasons { get; init; } = 3;

    /// <summary>Whether the score of an event that came with its label is published too. Default true.</summary>
    public bool PublishLabelled { get; init; } = true;
}
