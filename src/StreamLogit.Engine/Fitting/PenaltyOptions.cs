namespace StreamLogit.Engine.Fitting;

/// <summary>How a penalised fit is made.</summary>
public sealed record PenaltyOptions
{
    /// <summary>
    /// The factor of the penalty l2/2 |w|^2 beside the sum of the log-losses, above 0; 1/C where a strength C multiplies the losses. It is the
    /// precision of a normal prior of mean 0 on every coefficient but the intercept. Default 1.
    /// </summary>
    public double L2 { get; init; } = 1;

    /// <summary>How far the loss of the fit, summed over the rows, may be above the smallest, in nats, above 0. Default 1e-6.</summary>
    public double ToleranceNats { get; init; } = 1e-6;
}
