namespace StreamLogit.Worker.Alarms;

/// <summary>How patiently changes are sent.</summary>
internal sealed record WebhookPacing
{
    /// <summary>How long an answer may take.</summary>
    public TimeSpan AttemptTimeout { get; init; } = TimeSpan.FromSeconds(10);

    /// <summary>The wait before the second attempt, about; it doubles from one to the next.</summary>
    public TimeSpan FirstDelay { get; init; } = TimeSpan.FromSeconds(1);

    /// <summary>The longest wait between two attempts.</summary>
    public TimeSpan LongestDelay { get; init; } = TimeSpan.FromMinutes(5);

    /// <summary>How often a change is sent again before it is given up; with the waits above that is after about half an hour.</summary>
    public int Retries { get; init; } = 13;

    /// <summary>How many changes may wait; beyond it the oldest is dropped.</summary>
    public int QueueLength { get; init; } = 100;

    /// <summary>How long the end of the worker waits for what is still to be sent. The rest is sent by the next run.</summary>
    public TimeSpan Grace { get; init; } = TimeSpan.FromSeconds(5);
}
