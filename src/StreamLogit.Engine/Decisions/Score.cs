namespace StreamLogit.Engine.Decisions;

/// <summary>What is published for an event.</summary>
public struct Score
{
    /// <summary>The place of the event in its batch.</summary>
    public int Record;

    /// <summary>The probability that the event is bad, 0 to 1.</summary>
    public double Probability;

    /// <summary>ln(p / (1 - p)), finite.</summary>
    public double LogOdds;

    /// <summary>Whether the probability reaches the cutoff.</summary>
    public bool IsAlert;

    /// <summary>How many labels the model had learned when it gave this score.</summary>
    public long Version;

    /// <summary>How many reasons it has, in the batch's <see cref="ScoreBatch.Reasons"/>.</summary>
    public int ReasonCount;
}
