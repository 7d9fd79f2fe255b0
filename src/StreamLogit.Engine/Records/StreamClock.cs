namespace StreamLogit.Engine.Records;

/// <summary>
/// The clock of a stream: the highest time seen. A time too far ahead of it is refused, so that one bad clock cannot end the wait of every event.
/// Too far is more than the definition allows and also far out of the ordinary for this stream, whose records may lie weeks apart. When some records
/// in a row come from there, the stream was silent and has moved on, and the clock follows.
/// </summary>
/// <param name="aheadMicroseconds">How far ahead a time may lie whatever the stream.</param>
internal sealed class StreamClock(long aheadMicroseconds)
{
    /// <summary>So many records in a row, each near the one before, move the clock however far they lie ahead.</summary>
    public const int RecordsThatMoveOn = 10;

    // A step ahead of up to so many times the mean time between records is ordinary.
    private const double OrdinarySteps = 100;

    private long _firstMicroseconds;
    private long _taken;
    private long _refusedMicroseconds;
    private int _refusedInARow;

    /// <summary>The highest time taken, or the least value before the first.</summary>
    public long Microseconds { get; private set; } = long.MinValue;

    /// <summary>The clock, or null before the first record.</summary>
    public long? Now => Microseconds == long.MinValue ? null : Microseconds;

    /// <summary>Whether a record of that time can be used. Asked once for each record, and if so the clock then moves there.</summary>
    public bool Accepts(long timeMicroseconds)
    {
        if (Now is not { } now) _firstMicroseconds = timeMicroseconds;
        else if (timeMicroseconds - now > aheadMicroseconds && !IsOrdinary(timeMicroseconds - now) && !MovesOn(timeMicroseconds)) return false;
        _taken++;
        _refusedInARow = 0;
        return true;
    }

    /// <summary>Moves on to a time. An earlier one moves nothing back.</summary>
    public void MoveTo(long timeMicroseconds) => Microseconds = Math.Max(Microseconds, timeMicroseconds);

    public void Save(BinaryWriter writer)
    {
        writer.Write(Microseconds);
        writer.Write(_firstMicroseconds);
        writer.Write(_taken);
        writer.Write(_refusedMicroseconds);
        writer.Write(_refusedInARow);
    }

    public void Load(BinaryReader reader)
    {
        Microseconds = reader.ReadInt64();
        _firstMicroseconds = reader.ReadInt64();
        _taken = reader.ReadInt64();
        _refusedMicroseconds = reader.ReadInt64();
        _refusedInARow = reader.ReadInt32();
    }

    /// <summary>After one record nothing is known of the stream, so any step is ordinary.</summary>
    private bool IsOrdinary(long stepMicroseconds) =>
        _taken == 1 || stepMicroseconds <= OrdinarySteps * (Microseconds - _firstMicroseconds) / (_taken - 1);

    private bool MovesOn(long timeMicroseconds)
    {
        bool isNear = _refusedInARow > 0 && Math.Abs(timeMicroseconds - _refusedMicroseconds) <= aheadMicroseconds;
        _refusedInARow = isNear ? _refusedInARow + 1 : 1;
        _refusedMicroseconds = timeMicroseconds;
        return _refusedInARow >= RecordsThatMoveOn;
    }
}
