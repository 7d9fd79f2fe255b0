using System.Collections.Immutable;
using StreamLogit.Engine.Fitting;
using StreamLogit.Engine.Learning;

namespace StreamLogit.Pipeline.Fits;

/// <summary>What a fit to recordings gave.</summary>
public sealed record FitResult
{
    /// <summary>How it was fitted.</summary>
    public required FitMethod Method { get; init; }

    /// <summary>How the fit ended. Where it did not converge there are no coefficients.</summary>
    public required FitOutcome Outcome { get; init; }

    /// <summary>What the reader has to know, in plain sentences.</summary>
    public required ImmutableArray<string> Findings { get; init; }

    /// <summary>The intercept, then the columns. Of a penalised fit z and p are NaN, and so are the standard errors where there are too many columns.</summary>
    public required ImmutableArray<CoefficientEstimate> Coefficients { get; init; }

    /// <summary>Labelled events.</summary>
    public required long Rows { get; init; }

    /// <summary>The sum of their weights.</summary>
    public required double Weight { get; init; }

    /// <summary>The deviance in nats, NaN without convergence.</summary>
    public required double Deviance { get; init; }

    /// <summary>The deviance of the base rate alone.</summary>
    public required double NullDeviance { get; init; }

    /// <summary>The coefficients as a bank can start from them, or null without convergence.</summary>
    public required FittedModel? Model { get; init; }
}
