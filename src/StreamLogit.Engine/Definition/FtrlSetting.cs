namespace StreamLogit.Engine.Definition;

/// <summary>
/// Follow the regularised leader, proximal, with a step for every coefficient (McMahan et al., KDD 2013, algorithm 1). With the gradient
/// g = s (p - y) x of an event of weight s: sigma = (sqrt(n + g^2) - sqrt(n)) / Step, z &lt;- z + g - sigma w, n &lt;- n + g^2, and
/// w = 0 where |z| &lt;= L1, else -(z - sign(z) L1) / ((Beta + sqrt(n)) / Step + L2). The intercept is a coefficient whose x is 1, without L1 and L2.
/// </summary>
/// <param name="Step">The step (alpha), above 0, at most 1e6.</param>
/// <param name="Beta">What is added to sqrt(n), above 0.</param>
/// <param name="L1">The L1 penalty, 0 or more; above 0 it makes coefficients exactly 0.</param>
/// <param name="L2">The L2 penalty, 0 or more.</param>
public sealed record FtrlSetting(double Step, double Beta, double L1, double L2) : SettingOptions
{
    private protected override string RuleName => FormattableString.Invariant($"ftrl step={Step} beta={Beta} l1={L1} l2={L2}");
}
