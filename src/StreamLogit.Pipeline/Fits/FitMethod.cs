namespace StreamLogit.Pipeline.Fits;

/// <summary>How coefficients are fitted.</summary>
public enum FitMethod
{
    /// <summary>The largest likelihood, with standard errors, z and p.</summary>
    MaximumLikelihood,

    /// <summary>The largest likelihood less an L2 penalty, for categories with many values.</summary>
    Penalised,
}
