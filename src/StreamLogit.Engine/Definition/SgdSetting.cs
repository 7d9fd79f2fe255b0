namespace StreamLogit.Engine.Definition;

/// <summary>
/// Stochastic gradient descent. For the k-th learned event, k from 1, with eta = Step / k^StepDecay and the event's weight s:
/// w &lt;- w max(0, 1 - eta WeightDecay) + eta s (y - p) x, and b &lt;- b + eta s (y - p) for the intercept, which never decays.
/// </summary>
/// <param name="Step">The step of the first event, above 0, at most 1e6.</param>
/// <param name="StepDecay">The power by which the step falls with the events learned, 0 to 1.</param>
/// <param name="WeightDecay">The L2 penalty, 0 or more.</param>
public sealed record SgdSetting(double Step, double StepDecay, double WeightDecay) : SettingOptions
{
    /// <summary>
    /// Whether a large step or weight cannot carry the score past the label: eta s (y - p) is replaced by the limit of infinitely many
    /// infinitely small steps of the same total length (Karampatziakis &amp; Langford, UAI 2011). Default false.
    /// </summary>
    public bool IsOvershootProof { get; init; }

    private protected override string RuleName =>
        FormattableString.Invariant($"sgd step={Step} stepDecay={StepDecay} weightDecay={WeightDecay}") + (IsOvershootProof ? " overshootProof" : "");
}
