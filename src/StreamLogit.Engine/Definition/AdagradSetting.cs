namespace StreamLogit.Engine.Definition;

/// <summary>
/// AdaGrad with a diagonal matrix (Duchi, Hazan &amp; Singer, JMLR 12, 2011, 2121). With the gradient g = s (p - y) x of an event of weight s, for
/// each coefficient: G &lt;- rho G + g^2, then w &lt;- w - Step g / (1e-8 + sqrt(G)). The intercept is a coefficient whose x is 1.
/// </summary>
/// <param name="Step">The step, above 0, at most 1e6: the largest move of a coefficient at one label.</param>
/// <param name="SumHalfLifeLabels">
/// The number of labels after which a squared gradient counts half in G: rho = 2^(-1 / SumHalfLifeLabels), applied at every label to every
/// coefficient. 0: G never forgets, rho = 1, as published.
/// </param>
public sealed record AdagradSetting(double Step, double SumHalfLifeLabels) : SettingOptions
{
    private protected override string RuleName => FormattableString.Invariant($"adagrad step={Step} sumHalfLife={SumHalfLifeLabels}");
}
