namespace StreamLogit.Pipeline.Replay.Comparison;

/// <summary>What decisions cost.</summary>
/// <param name="Cutoff">The probability from which on there is an alert, 0 to 1.</param>
/// <param name="FalseAlarm">The cost of an alert for an event with label 0.</param>
/// <param name="Miss">The cost of no alert for an event with label 1.</param>
public sealed record DecisionCost(double Cutoff, double FalseAlarm, double Miss)
{
    /// <summary>
    /// The costs for which a cutoff is the best one (Elkan, IJCAI 2001): a false alarm costs the cutoff and a miss what it lacks to 1, so that at the
    /// cutoff both decisions are expected to cost the same.
    /// </summary>
    public static DecisionCost OfCutoff(double cutoff) => new(cutoff, cutoff, 1 - cutoff);

    internal double Of(double probability, int label) => probability >= Cutoff ? label == 0 ? FalseAlarm : 0 : label == 1 ? Miss : 0;
}
