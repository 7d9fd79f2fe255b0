using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Features.Histories;

/// <summary>A few numbers in every row of a table that sum up the past of a key. Histories that need the same ones share them.</summary>
internal abstract class Accumulator(long halfLifeMicroseconds)
{
    /// <summary>The time in which its decayed words halve, in microseconds.</summary>
    public long HalfLifeMicroseconds { get; } = halfLifeMicroseconds;

    /// <summary>Numbers that halve with every half-life.</summary>
    public abstract int DecayedWords { get; }

    /// <summary>Numbers that do not.</summary>
    public virtual int SteadyWords => 0;

    /// <summary>Where in the row the decayed words begin.</summary>
    public int Decayed { get; set; }

    /// <summary>Where in the row the steady words begin.</summary>
    public int Steady { get; set; }

    /// <summary>The half-life's place among those of the table.</summary>
    public int HalfLifeIndex { get; set; }

    /// <summary>What tells it from others of its type and half-life.</summary>
    public virtual (int Field, int Size) Identity => default;

    /// <summary>Lets time pass that is not in the decay of the decayed words.</summary>
    public virtual void Advance(Span<double> row, double halfLives) { }

    /// <summary>Adds an event.</summary>
    /// <param name="row">The row, its decayed words as of the key's clock.</param>
    /// <param name="records">Where the event is.</param>
    /// <param name="record">Which it is.</param>
    /// <param name="weight">How much the event counts as of the key's clock: 1, or less where the event is late.</param>
    public virtual void Add(Span<double> row, RecordBatch records, int record, double weight) { }
}
