namespace StreamLogit.Engine.Health.Drift;

/// <summary>How far a feature's values have moved from those of the reference period.</summary>
/// <param name="Feature">The feature, or <c>published log-odds</c>.</param>
/// <param name="Psi">
/// The population stability index in nats, over tenths of the reference's values (numbers) or over 64 groups of values by their hash, rare ones together (categories); every cell gets half an event
/// more on both sides, so that none is empty. NaN until the reference period is over.
/// </param>
/// <param name="Cells">Over how many cells.</param>
/// <param name="PsiByChance">What chance alone gives on average where nothing moved: (cells - 1)(1/n + 1/m).</param>
/// <param name="PsiByChance95">What chance alone exceeds once in twenty times.</param>
/// <param name="MissingShare">The share of events without a value, 0 to 1.</param>
/// <param name="ReferenceMissingShare">The same in the reference period.</param>
/// <param name="UnseenShare">The share of events with a value that no event had before, 0 to 1; always 0 for numbers.</param>
/// <param name="ReferenceUnseenShare">The same in the reference period.</param>
public sealed record FeatureDrift(
    string Feature,
    double Psi,
    int Cells,
    double PsiByChance,
    double PsiByChance95,
    double MissingShare,
    double ReferenceMissingShare,
    double UnseenShare,
    double ReferenceUnseenShare);
