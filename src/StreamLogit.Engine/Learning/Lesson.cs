namespace StreamLogit.Engine.Learning;

/// <summary>One label, as an update rule needs it.</summary>
internal readonly ref struct Lesson
{
    /// <summary>0 or 1.</summary>
    public required int Label { get; init; }

    /// <summary>The importance of the event, 0 or more.</summary>
    public required double Weight { get; init; }

    /// <summary>Time on the stream's clock since the label before, 0 at the first.</summary>
    public required double ElapsedMicroseconds { get; init; }

    /// <summary>Log-odds that the warm start adds for every setting.</summary>
    public required double Offset { get; init; }

    /// <summary>
    /// What every place of the row gives at present to the label that was not the case; empty when that is not known and must be computed.
    /// Only for rules that publish the very log-odds that they learn from.
    /// </summary>
    public required ReadOnlySpan<double> MissProbability { get; init; }

    /// <summary>Whether the last score that every setting computed is that of the event at present, where the lesson needs one.</summary>
    public bool IsScored { get; init; }

    /// <summary>The weight, with the sign of the direction in which the log-odds must move.</summary>
    public double SignedWeight => Weight * (2 * Label - 1);
}
