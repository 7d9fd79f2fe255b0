namespace StreamLogit.Engine.Fitting;

/// <summary>How a fit ended.</summary>
public enum FitOutcome
{
    /// <summary>The coefficients are those of the largest likelihood.</summary>
    Converged,

    /// <summary>All labels are the same, or there are none: the intercept has no finite estimate.</summary>
    OneClass,

    /// <summary>A combination of columns tells all ones from all zeros: there are no finite estimates.</summary>
    PerfectSeparation,

    /// <summary>A combination of columns tells some ones and zeros apart and says nothing of the others: there are no finite estimates.</summary>
    QuasiSeparation,

    /// <summary>The steps went on too long, which happens when the columns nearly separate the labels or nearly determine each other.</summary>
    NotConverged,
}
