using System.Collections.Immutable;

namespace StreamLogit.Engine.Definition;

/// <summary>
/// The n-grams of a text: runs of n words, or of n characters, each with a coefficient hashed into the slots. An event with m of them
/// has 1/sqrt(m) at each, however often each occurs.
/// </summary>
/// <param name="Field">The path of the field.</param>
public sealed record TextFeature(string Field) : FeatureOptions
{
    /// <summary>The lengths of word n-grams, each 1 to 5.</summary>
    public ImmutableArray<int> WordLengths { get; init; } = [];

    /// <summary>The lengths of character n-grams, each 1 to 8.</summary>
    public ImmutableArray<int> CharacterLengths { get; init; } = [];

    /// <summary>The most different n-grams of each length, from the beginning of the text. Default 200.</summary>
    public int Most { get; init; } = 200;

    /// <inheritdoc/>
    public override string Name => $"text of {Field}";

    /// <summary>One for a missing text.</summary>
    public override int DenseCoefficients => 1;

    /// <inheritdoc/>
    public override string Identity => FormattableString.Invariant($"{base.Identity} words {string.Join(' ', WordLengths)} characters {string.Join(' ', CharacterLengths)} most {Most}");
}
