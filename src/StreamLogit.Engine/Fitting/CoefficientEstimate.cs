namespace StreamLogit.Engine.Fitting;

/// <summary>A coefficient with what is known of its error.</summary>
/// <param name="Name">The column, or <c>intercept</c>.</param>
/// <param name="Estimate">The change of the log-odds with one unit of the column. NaN where the column is left out because others determine it.</param>
/// <param name="StandardError">The square root of its variance in the inverse of the Fisher information; NaN where there is none.</param>
/// <param name="Z">Estimate / standard error (Wald).</param>
/// <param name="P">The two-sided probability of a |z| as large under the normal distribution, if the coefficient were 0.</param>
public readonly record struct CoefficientEstimate(string Name, double Estimate, double StandardError, double Z, double P)
{
    /// <summary>The name of the intercept.</summary>
    public const string Intercept = "intercept";
}
