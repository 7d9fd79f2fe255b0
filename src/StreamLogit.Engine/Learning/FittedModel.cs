using System.Collections.Immutable;

namespace StreamLogit.Engine.Learning;

/// <summary>Coefficients from a fit, with all that gives them their meaning. A bank can start from them. Immutable.</summary>
public sealed record FittedModel
{
    /// <summary>What gives every slot its meaning: features, slots and hash seed.</summary>
    public required string SlotMeaning { get; init; }

    /// <summary>The intercept.</summary>
    public required double Intercept { get; init; }

    /// <summary>The coefficients, 0 for slots that are not here.</summary>
    public required ImmutableArray<FittedCoefficient> Coefficients { get; init; }

    /// <summary>The scales that the features had learned from the events that were fitted.</summary>
    public required ImmutableArray<FittedScale> Scales { get; init; }
}
