using System.Collections.Immutable;
using System.Globalization;

namespace StreamLogit.Engine.Definition;

/// <summary>How reasons name a feature together with its figure, as a person on call reads it.</summary>
/// <param name="Phrases">Phrases by rising bound, the last one without a bound.</param>
/// <param name="Unknown">For a key that has no past to take a figure from.</param>
/// <param name="Missing">For an event that lacks a field.</param>
public sealed record ReasonWords(ImmutableArray<ReasonPhrase> Phrases, string Unknown, string Missing)
{
    /// <summary>The figure that stands for <see cref="Unknown"/>. <see cref="Missing"/> is NaN.</summary>
    public const double UnknownFigure = double.PositiveInfinity;

    /// <summary>The phrase for a figure, or null for one that has none: unknown or missing.</summary>
    public ReasonPhrase? PhraseFor(double figure)
    {
        foreach (var phrase in Phrases)
            if (figure < phrase.Below) return phrase;
        return null;
    }

    /// <summary>The words for a figure.</summary>
    public string Of(double figure) => PhraseFor(figure) is { } phrase
        ? phrase.After is null ? phrase.Before : phrase.Before + phrase.NumberOf(figure).ToString(phrase.Format, CultureInfo.InvariantCulture) + phrase.After
        : double.IsNaN(figure) ? Missing : Unknown;
}
