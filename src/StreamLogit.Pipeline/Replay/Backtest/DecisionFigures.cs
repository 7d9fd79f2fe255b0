using System.Collections.Immutable;

namespace StreamLogit.Pipeline.Replay.Backtest;

/// <summary>What a model's alerts came to, and how far its probabilities came true. All counts are weighted.</summary>
/// <param name="Cutoff">The probability from which on there is an alert.</param>
/// <param name="Weight">The weight of all labels.</param>
/// <param name="Alerts">Of those with an alert.</param>
/// <param name="TrueAlerts">Of those with an alert and label 1.</param>
/// <param name="Ones">Of those with label 1.</param>
/// <param name="Reliability">The bins with anything in them, in the order of the probabilities.</param>
public sealed record DecisionFigures(
    double Cutoff, double Weight, double Alerts, double TrueAlerts, double Ones, ImmutableArray<ReliabilityBin> Reliability)
{
    /// <summary>The share of alerts that were right, NaN without any.</summary>
    public double Precision => TrueAlerts / Alerts;

    /// <summary>The share of ones that had an alert, NaN without any.</summary>
    public double Recall => TrueAlerts / Ones;

    /// <summary>The share of all that had an alert, NaN without any.</summary>
    public double AlertRate => Alerts / Weight;
}
