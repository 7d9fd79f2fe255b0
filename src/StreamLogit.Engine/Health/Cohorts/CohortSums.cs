using System.Runtime.InteropServices;

namespace StreamLogit.Engine.Health.Cohorts;

/// <summary>Sums over the events that were scored in one hour or day, with what labels say of them, whenever those came.</summary>
[StructLayout(LayoutKind.Sequential)]
internal struct CohortSums
{
    /// <summary>Events scored.</summary>
    public double Events;

    /// <summary>Those whose label is known; a kept event counts for all that it stands for.</summary>
    public double Labelled;

    /// <summary>Sum of the weights of their labels.</summary>
    public double Weight;

    /// <summary>Sum of weight times log-loss.</summary>
    public double LogLoss;

    /// <summary>The same of the base rate.</summary>
    public double BaseRateLogLoss;

    /// <summary>Sum of weight times published probability.</summary>
    public double Probability;

    /// <summary>Sum of weight over labels 1.</summary>
    public double Positive;

    /// <summary>Whether nothing happened.</summary>
    public readonly bool IsEmpty => Events == 0 && Weight == 0 && Labelled == 0;
}
