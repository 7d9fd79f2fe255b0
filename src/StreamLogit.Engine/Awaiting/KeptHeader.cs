using System.Runtime.CompilerServices;

namespace StreamLogit.Engine.Awaiting;

/// <summary>What is kept of a scored event besides its log-odds, its vector and its id.</summary>
internal struct KeptHeader
{
    /// <summary>The hash of its id.</summary>
    public ulong IdHash;

    /// <summary>The stream's clock when it was scored, in microseconds; its wait counts from there.</summary>
    public long ScoredAtMicroseconds;

    /// <summary>The event's own time.</summary>
    public long TimeMicroseconds;

    /// <summary>The log-odds that were published.</summary>
    public double LogOdds;

    /// <summary>The importance weight that the event gave, or NaN.</summary>
    public double Weight;

    /// <summary>Which value of each sliced field it had, as health codes them.</summary>
    public ulong Slices;

    /// <summary>1 where the decision was <c>alert</c>, else 0.</summary>
    public int Alert;

    /// <summary>How many events it stands for, where others like it were not kept.</summary>
    public int StandsFor;

    /// <summary>Entries of its vector.</summary>
    public int Entries;

    /// <summary>Bytes of its id.</summary>
    public int IdLength;

    /// <summary>Its place among the events of its segment.</summary>
    public int Ordinal;

    /// <summary>Bytes that it takes in the segment.</summary>
    public int TotalBytes;

    public static int Size => Unsafe.SizeOf<KeptHeader>();
}
