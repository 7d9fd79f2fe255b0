using System.Collections.Immutable;

namespace StreamLogit.Engine.Definition;

/// <summary>How reasons name a feature together with its figure, as a person on call reads it.</summary>
/// <param name="Phrases">Phrases by rising bound, the last one without a bound.</param>
/// <param name="Unknown">For a key that has no past to take a figure from.</param>
/// <param name="Missing">For an event that lacks a field.</param>
public sealed record ReasonWords(ImmutableArray<ReasonPhrase> Phrases, string Unknown, string Missing)
{
    /// <summary>The figure that stands for <see cref="Unknown"/>. <see cref="Missing"/> is NaN.</summary>
    public const double UnknownFigure = double.PositiveInfinity;

    /// <summary>The words for a figure, without a number where <paramref name="number"/> is null.</summary>
    /// <param name="figure">The figure.</param>
    /// <param name="number">The number between them.</param>
    /// <returns>The phrase.</returns>
    public ReasonPhrase PhraseFor(double figure, out double? number)
    {
        number = null;
        if (double.IsNaN(figure)) return new ReasonPhrase(figure, Missing);
        foreach (var phrase in Phrases)
        {
            if (!(figure < phrase.Below)) continue;
            if (phrase.After is not null) number = Math.Abs(figure) / phrase.Unit;
            return phrase;
        }
        return new ReasonPhrase(figure, Unknown);
    }
}
