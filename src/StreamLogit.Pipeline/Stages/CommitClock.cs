namespace StreamLogit.Pipeline.Stages;

/// <summary>Says when a commit is due: after so many records or so much wall time, whichever comes first, if there is anything to commit.</summary>
internal sealed class CommitClock(int everyEvents, TimeSpan everyTime, TimeProvider time)
{
    private long _last = time.GetTimestamp();
    private long _uncommitted;

    public bool IsDue => _uncommitted > 0 && (_uncommitted >= everyEvents || time.GetElapsedTime(_last) >= everyTime);

    public void Add(int records) => _uncommitted += records;

    public void Restart()
    {
        _uncommitted = 0;
        _last = time.GetTimestamp();
    }
}
