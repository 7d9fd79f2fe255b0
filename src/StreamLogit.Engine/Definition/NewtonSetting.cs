namespace StreamLogit.Engine.Definition;

/// <summary>
/// Recursive second-order update of the intercept and the dense coefficients: the posterior of a Bayesian logistic regression, kept as a normal
/// distribution with full covariance P, one label at a time (Spiegelhalter &amp; Lauritzen, Networks 20, 1990, 579). At each label P is divided by
/// ForgettingFactor, then the mode along x is found exactly, and P^-1 &lt;- P^-1 + s p (1 - p) x x' with p at the mode.
/// Hashed coefficients take no part.
/// </summary>
/// <remarks>
/// The published log-odds are moderated: z / sqrt(1 + pi v / 8) with the variance v = x'Px of the log-odds z (MacKay, Neural Computation 4, 1992,
/// 720). The variance of each coefficient, given those behind it in the order of the features (the intercept is the last), never grows beyond the
/// prior's, so that forgetting cannot blow up what no event tells about. A time of forgetting divides P by the square of the factor with which it
/// pulls the coefficients.
/// </remarks>
/// <param name="ForgettingFactor">Above 0, at most 1 (never forgets); the memory is about 1 / (1 - ForgettingFactor) labels.</param>
/// <param name="PriorVariance">The variance of every coefficient before the first label, above 0, at most 1e6.</param>
public sealed record NewtonSetting(double ForgettingFactor, double PriorVariance) : SettingOptions
{
    /// <summary>The most dense coefficients that the rule takes, because its covariance grows with their square.</summary>
    public const int MostDenseCoefficients = 512;

    private protected override string RuleName => FormattableString.Invariant($"newton forgetting={ForgettingFactor} prior={PriorVariance}");
}
