using System.Collections.Immutable;
using StreamLogit.Engine.Health;
using StreamLogit.Pipeline;

namespace StreamLogit.Worker.Web.Views;

/// <summary>What a run had published at one moment.</summary>
/// <param name="Health">Its health.</param>
/// <param name="Progress">How far it had come.</param>
/// <param name="Rejects">Examples of its rejects.</param>
/// <param name="Coefficients">Its largest coefficients, and what they were before.</param>
internal sealed record HealthMoment(HealthSnapshot Health, LoopProgress Progress, ImmutableArray<RejectExample> Rejects, CoefficientTrail Coefficients)
{
    /// <summary>Whether nothing was published between this moment and the other.</summary>
    public bool IsSame(HealthMoment other) =>
        ReferenceEquals(Health, other.Health) && Progress == other.Progress && Rejects == other.Rejects && ReferenceEquals(Coefficients, other.Coefficients);
}
