namespace StreamLogit.Engine.Health;

/// <summary>A label on its way into health, with all that it takes to take it back later.</summary>
internal struct CountedLabel
{
    /// <summary>The log-odds that were published for its event.</summary>
    public double LogOdds;

    /// <summary>Its weight, 0 or more.</summary>
    public double Weight;

    /// <summary>The stream's clock when it came.</summary>
    public long ClockMicroseconds;

    /// <summary>The stream's clock when its event was scored; the same where it came with its event.</summary>
    public long ScoredAtMicroseconds;

    /// <summary>Which value of each sliced field its event had, four codes of 16 bits.</summary>
    public ulong Slices;

    /// <summary>0 or 1.</summary>
    public int Label;

    /// <summary>How many events it is the label of, where others like its event were not kept; 0 where it is only assumed, because the wait is over.</summary>
    public int StandsFor;

    /// <summary>1 where the decision on its event was <c>alert</c>, else 0.</summary>
    public int Alert;
}
