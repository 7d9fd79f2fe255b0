using System.Collections.Immutable;

namespace StreamLogit.Engine.Fitting;

/// <summary>A logistic regression by maximum likelihood.</summary>
public sealed record LogisticFit
{
    /// <summary>How the fit ended. Only <see cref="FitOutcome.Converged"/> has coefficients.</summary>
    public required FitOutcome Outcome { get; init; }

    /// <summary>What the reader has to know, each in a plain sentence: separation, columns left out. Empty when there is nothing to say.</summary>
    public required ImmutableArray<string> Findings { get; init; }

    /// <summary>The intercept and, behind it, every column in its order. Empty without convergence.</summary>
    public ImmutableArray<CoefficientEstimate> Coefficients { get; init; } = [];

    /// <summary>Rows with a weight above 0.</summary>
    public required long Rows { get; init; }

    /// <summary>The sum of their weights.</summary>
    public required double Weight { get; init; }

    /// <summary>Twice the log-likelihood that is missing to a model with one probability for each row, in nats. NaN without convergence.</summary>
    public double Deviance { get; init; } = double.NaN;

    /// <summary>The deviance of the base rate alone.</summary>
    public double NullDeviance { get; init; } = double.NaN;

    /// <summary>Newton steps.</summary>
    public int Steps { get; init; }

    /// <summary>Rows minus coefficients.</summary>
    public long ResidualDegreesOfFreedom => Rows - Coefficients.Count(c => !double.IsNaN(c.Estimate));

    /// <summary>The estimate of a column, or of <see cref="CoefficientEstimate.Intercept"/>.</summary>
    /// <exception cref="InvalidOperationException">There is none of that name.</exception>
    public CoefficientEstimate this[string name] => Coefficients.First(c => c.Name == name);
}
