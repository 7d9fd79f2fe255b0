namespace StreamLogit.Tests.Contracts;

/// <summary>A clock that stands still until somebody waits, and then jumps to the end of the wait.</summary>
internal sealed class JumpingTime : TimeProvider
{
    private long _ticks;

    /// <summary>The time that was waited so far.</summary>
    public TimeSpan Elapsed => new(Interlocked.Read(ref _ticks));

    public override long TimestampFrequency => TimeSpan.TicksPerSecond;

    public override long GetTimestamp() => Interlocked.Read(ref _ticks);

    public void Advance(TimeSpan time) => Interlocked.Add(ref _ticks, time.Ticks);

    public override ITimer CreateTimer(TimerCallback callback, object? state, TimeSpan dueTime, TimeSpan period)
    {
        if (dueTime < TimeSpan.Zero) return new Fired();
        Advance(dueTime);
        // Not from within: whoever makes a timer does not expect to be called back before it has it.
        ThreadPool.QueueUserWorkItem(_ => callback(state));
        return new Fired();
    }

    private sealed class Fired : ITimer
    {
        public bool Change(TimeSpan dueTime, TimeSpan period) => true;

        public void Dispose() { }

        public ValueTask DisposeAsync() => ValueTask.CompletedTask;
    }
}
