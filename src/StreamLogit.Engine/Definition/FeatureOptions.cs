using System.Collections.Immutable;

namespace StreamLogit.Engine.Definition;

/// <summary>How the value of a number becomes a feature value.</summary>
public enum NumberScale
{
    /// <summary>As it is.</summary>
    None,

    /// <summary>sign(x) ln(1 + |x|).</summary>
    Log1p,

    /// <summary>(x - mean) / standard deviation, both over the events seen before this one.</summary>
    Standard,
}

/// <summary>One feature: how some fields of an event become entries of its sparse vector.</summary>
public abstract record FeatureOptions
{
    private protected FeatureOptions() { }

    /// <summary>The name under which the feature stands in reasons and reports.</summary>
    public abstract string Name { get; }
}

/// <summary>A numeric field. Where it is missing it contributes 0 and switches on a coefficient of its own.</summary>
/// <param name="Field">The path of the field.</param>
/// <param name="Scale">How its value is scaled.</param>
public sealed record NumberFeature(string Field, NumberScale Scale) : FeatureOptions
{
    /// <inheritdoc/>
    public override string Name => Field;
}

/// <summary>A categorical field, or the crossing of several: one coefficient for every (combination of) value(s), hashed into the slots.</summary>
/// <param name="Fields">The paths of the fields, at least one.</param>
public sealed record CategoryFeature(ImmutableArray<string> Fields) : FeatureOptions
{
    /// <inheritdoc/>
    public override string Name => string.Join(" & ", Fields);
}

/// <summary>Sine and cosine of the event's time over a period.</summary>
/// <param name="PeriodMicroseconds">The period in microseconds.</param>
/// <param name="Label">The period as the definition writes it, for names: <c>1d</c>.</param>
public sealed record TimeCycleFeature(long PeriodMicroseconds, string Label) : FeatureOptions
{
    /// <inheritdoc/>
    public override string Name => $"time of {Label}";
}

/// <summary>Sine and cosine of a numeric field over a period, as of a compass bearing over 360.</summary>
/// <param name="Field">The path of the field.</param>
/// <param name="Period">The period in the unit of the field.</param>
public sealed record NumberCycleFeature(string Field, double Period) : FeatureOptions
{
    /// <inheritdoc/>
    public override string Name => FormattableString.Invariant($"{Field} of {Period}");
}
