namespace StreamLogit.Engine.Health.Cohorts;

/// <summary>How many of the events of an age have their label.</summary>
/// <param name="FromMicroseconds">The least age.</param>
/// <param name="ToMicroseconds">The age that is not reached.</param>
/// <param name="Events">Events of such an age.</param>
/// <param name="Labelled">Those whose label is known; where some are not kept, a kept one counts for all that it stands for.</param>
public readonly record struct LabelledAtAge(long FromMicroseconds, long ToMicroseconds, long Events, double Labelled)
{
    /// <summary>The share of them whose label is known.</summary>
    public double Share => Labelled / Events;
}
