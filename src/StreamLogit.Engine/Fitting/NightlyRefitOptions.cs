namespace StreamLogit.Engine.Fitting;

/// <summary>How the nightly refit is made.</summary>
public sealed record NightlyRefitOptions
{
    /// <summary>Calendar days (UTC) that a fit looks back on, 1 or more. Default 30.</summary>
    public int TrailingDays { get; init; } = 30;

    /// <summary>Days for which the fit that scored them is kept, to score an event by the fit of its day when its label comes later, 1 or more. Default 31.</summary>
    public int KeptFits { get; init; } = 31;

    /// <summary>The penalty and the tolerance of the fits. The tolerance is wider than usual: a thousandth of a nat over the whole window changes no score that matters.</summary>
    public PenaltyOptions Penalty { get; init; } = new() { ToleranceNats = 1e-3 };
}
