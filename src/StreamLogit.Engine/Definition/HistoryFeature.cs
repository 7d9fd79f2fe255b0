using System.Collections.Immutable;

namespace StreamLogit.Engine.Definition;

/// <summary>
/// What happened lately with the same value of a field (or the same values of several): the same card, pump or route. The event itself does not count.
/// Where a field that it needs is missing, or a key has no past to take a figure from, it contributes 0 and switches on a coefficient of its own.
/// </summary>
/// <param name="Kind">What is known of the past.</param>
/// <param name="Per">The paths of the fields that make up the key, at least one.</param>
public sealed record HistoryFeature(HistoryKind Kind, ImmutableArray<string> Per) : FeatureOptions
{
    /// <summary>The path of the field that the kinds sum, mean, deviation, distinct and new look at; null for the others.</summary>
    public string? Of { get; init; }

    /// <summary>The time in which the weight of an event halves, in microseconds; of no meaning for the kinds gap and new.</summary>
    public long HalfLifeMicroseconds { get; init; }

    /// <summary>The half-life (of the kind new: the time within which a pair is not new) as the definition writes it, for names: <c>1h</c>.</summary>
    public string Span { get; init; } = "";

    /// <summary>For the kind new: how long a pair that was seen is not new, in microseconds of the stream's clock.</summary>
    public long WithinMicroseconds { get; init; }

    /// <summary>
    /// How the figure is scaled. Default <see cref="NumberScale.StandardLog1p"/> for count, sum, mean, gap and distinct, <see cref="NumberScale.LogOdds"/> for rate,
    /// <see cref="NumberScale.None"/> for the others.
    /// </summary>
    public NumberScale Scale { get; init; } = Kind switch
    {
        HistoryKind.Count or HistoryKind.Sum or HistoryKind.Mean or HistoryKind.Distinct or HistoryKind.Gap => NumberScale.StandardLog1p,
        HistoryKind.Rate => NumberScale.LogOdds,
        _ => NumberScale.None,
    };

    /// <summary>For the kind rate: how many labels' worth the overall rate weighs against the key's own labels, above 0. Default 10.</summary>
    public double Prior { get; init; } = 10;

    /// <summary>
    /// For the kind distinct: how many values are kept for a key, 8 to 1024. Up to one less it is exact; beyond, the standard error is
    /// 1 / sqrt(values - 2), and a value takes 8 bytes of every key. Default 32.
    /// </summary>
    public int Values { get; init; } = 32;

    /// <inheritdoc/>
    public override string Name =>
        $"{Kind.ToString().ToLowerInvariant()}{(Of is null ? "" : " of " + Of)} per {string.Join(" & ", Per)}{(Span.Length == 0 ? "" : " over " + Span)}";

    /// <summary>One for the figure and one for its absence.</summary>
    public override int DenseCoefficients => 2;

    /// <inheritdoc/>
    public override string Identity => FormattableString.Invariant($"history {Name} {HalfLifeMicroseconds} {WithinMicroseconds} scale {Scale} prior {Prior} values {Values}");

    /// <inheritdoc/>
    public override ReasonWords Words => HistoryWords.Of(this);
}
