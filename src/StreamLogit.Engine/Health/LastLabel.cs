namespace StreamLogit.Engine.Health;

/// <summary>What the window of the last labels keeps of each. Plain data, so that it can be saved.</summary>
internal struct LastLabel
{
    /// <summary>The log-odds that were published for its event.</summary>
    public double LogOdds;

    /// <summary>Its weight, 0 or more.</summary>
    public double Weight;

    /// <summary>-ln of the probability that the Krichevsky-Trofimov predictor gave to it.</summary>
    public double BaseRateLogLoss;

    /// <summary>0 or 1.</summary>
    public int Label;

    /// <summary>1 where the decision on its event was <c>alert</c>, else 0.</summary>
    public int Alert;
}
