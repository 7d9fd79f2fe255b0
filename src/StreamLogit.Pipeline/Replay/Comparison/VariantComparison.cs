namespace StreamLogit.Pipeline.Replay.Comparison;

/// <summary>A variant against the reference.</summary>
/// <param name="Name">The variant.</param>
/// <param name="Figures">Its own figures.</param>
/// <param name="Losses">Its losses less those of the reference.</param>
/// <param name="Auc">Its AUC less that of the reference; NaN where it was not compared.</param>
/// <param name="Better">The evidence that its log-loss is lower than the reference's.</param>
/// <param name="Worse">The evidence that it is higher.</param>
public sealed record VariantComparison(
    string Name, ModelFigures Figures, VariantDifferences Losses, Difference Auc, Evidence Better, Evidence Worse);
