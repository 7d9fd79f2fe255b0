namespace StreamLogit.Engine.Definition;

/// <summary>One setting of the bank: an update rule with its numbers.</summary>
public abstract record SettingOptions
{
    private protected SettingOptions() { }

    /// <summary>The rule and all its numbers, so that two settings have equal names exactly when they are equal.</summary>
    public abstract string Name { get; }
}

/// <summary>
/// Stochastic gradient descent. For the k-th learned event, k from 1, with eta = Step / k^StepDecay and the event's weight s:
/// w &lt;- w max(0, 1 - eta WeightDecay) + eta s (y - p) x, and b &lt;- b + eta s (y - p) for the intercept, which never decays.
/// </summary>
/// <param name="Step">The step of the first event, above 0.</param>
/// <param name="StepDecay">The power by which the step falls with the events learned, 0 to 1.</param>
/// <param name="WeightDecay">The L2 penalty, 0 or more.</param>
public sealed record SgdSetting(double Step, double StepDecay, double WeightDecay) : SettingOptions
{
    /// <inheritdoc/>
    public override string Name => FormattableString.Invariant($"sgd step={Step} stepDecay={StepDecay} weightDecay={WeightDecay}");
}
