namespace StreamLogit.Engine.Health.Cohorts;

/// <summary>The events that were scored in one hour or day, and what is known of them by now.</summary>
/// <param name="FromMicroseconds">When it starts, in microseconds since 1970, on the stream's clock at scoring.</param>
/// <param name="LengthMicroseconds">How long it is.</param>
/// <param name="Events">Events scored.</param>
/// <param name="Labelled">Those whose label is known; where some are not kept, a kept one counts for all that it stands for.</param>
/// <param name="Weight">The sum of the weights of these labels.</param>
/// <param name="LogLoss">Mean log-loss of the published probabilities, in nats; NaN without labels.</param>
/// <param name="BaseRateLogLoss">The same of the base rate.</param>
/// <param name="MeanProbability">Mean published probability of the labelled events.</param>
/// <param name="ObservedRate">Share of their labels that are 1.</param>
public readonly record struct EventCohort(
    long FromMicroseconds, long LengthMicroseconds, long Events, double Labelled, double Weight, double LogLoss, double BaseRateLogLoss,
    double MeanProbability, double ObservedRate)
{
    /// <summary>The share of its events whose label is known; NaN without events.</summary>
    public double LabelledShare => Labelled / Events;
}
