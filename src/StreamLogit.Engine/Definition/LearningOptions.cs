using System.Collections.Immutable;
using StreamLogit.Engine.Learning;

namespace StreamLogit.Engine.Definition;

/// <summary>The bank of settings that learn side by side, and what is published of them.</summary>
public sealed record LearningOptions
{
    /// <summary>Coefficient slots for hashed categories, a power of two from 2^4 to 2^26. Default 2^18.</summary>
    public int Slots { get; init; } = 1 << 18;

    /// <summary>The seed of the hash that gives a category its slot. Default 0.</summary>
    public ulong HashSeed { get; init; }

    /// <summary>
    /// The probability that a model gives before it has learned anything, above 0 and below 1: its log-odds is where every intercept starts.
    /// Where bad events are rare and labels late, 0.5 makes every event of the first days an alert. Default 0.5.
    /// </summary>
    public double StartProbability { get; init; } = 0.5;

    /// <summary>Coefficients from a fit that every setting starts from and decays towards, or null for 0 and <see cref="StartProbability"/>.</summary>
    public FittedModel? WarmStart { get; init; }

    /// <summary>The settings, at most 64, each with a name that no other has. Default: <see cref="DefaultBank.Settings"/>.</summary>
    public ImmutableArray<SettingOptions> Bank { get; init; } = DefaultBank.Settings;

    /// <summary>The name of the setting that is published, or null for the blend of all.</summary>
    public string? PublishedSetting { get; init; }

    /// <summary>
    /// The switch rate of fixed share (Herbster &amp; Warmuth 1998): the share of weight that every label spreads over all settings,
    /// 0 (exponential weights, for one best setting) to 1. Default 1e-4.
    /// </summary>
    public double SwitchRate { get; init; } = 1e-4;
}
