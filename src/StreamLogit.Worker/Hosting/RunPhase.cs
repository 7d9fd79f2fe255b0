namespace StreamLogit.Worker.Hosting;

/// <summary>Whether the stream runs now. Any thread may ask.</summary>
internal sealed class RunPhase
{
    private volatile bool _isRunning;

    public bool IsRunning
    {
        get => _isRunning;
        set => _isRunning = value;
    }
}
