namespace StreamLogit.Engine.Definition;

/// <summary>One setting of the bank: an update rule with its numbers.</summary>
/// <remarks>
/// Wherever a rule pulls coefficients towards 0 (decay, penalties, <see cref="ForgetHalfLifeMicroseconds"/>) and the bank was given a warm
/// start, it pulls them towards the warm start's values instead.
/// </remarks>
public abstract record SettingOptions
{
    private protected SettingOptions() { }

    /// <summary>
    /// The time on the stream's clock, in microseconds, in which every coefficient but the intercept loses half of its distance from 0.
    /// 0, the default: never. The pull is applied when a label is learned, for the time since the label before.
    /// </summary>
    public long ForgetHalfLifeMicroseconds { get; init; }

    /// <summary>The rule and all its numbers, so that two settings have equal names exactly when they are equal. Plain ASCII, the same in every culture.</summary>
    public string Name => ForgetHalfLifeMicroseconds == 0 ? RuleName : $"{RuleName} forget={DurationName(ForgetHalfLifeMicroseconds)}";

    /// <summary>The name without what every rule has.</summary>
    private protected abstract string RuleName { get; }

    private static string DurationName(long microseconds)
    {
        foreach (var (unit, length) in new[] { ("w", 604_800_000_000), ("d", 86_400_000_000), ("h", 3_600_000_000), ("m", 60_000_000), ("s", 1_000_000L) })
            if (microseconds % length == 0) return FormattableString.Invariant($"{microseconds / length}{unit}");
        return FormattableString.Invariant($"{microseconds / 1000m}ms");
    }
}
