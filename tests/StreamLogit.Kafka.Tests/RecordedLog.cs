using Microsoft.Extensions.Logging;

namespace StreamLogit.Kafka.Tests;

/// <summary>Keeps what is logged.</summary>
internal sealed class RecordedLog : ILogger
{
    private readonly Lock _lock = new();
    private readonly List<(int Id, string Text)> _lines = [];

    /// <summary>The lines from level information on.</summary>
    public IReadOnlyList<(int Id, string Text)> Lines
    {
        get
        {
            lock (_lock) return [.. _lines];
        }
    }

    /// <summary>Whether something with an event id was logged.</summary>
    public bool Has(int id) => Lines.Any(line => line.Id == id);

    public IDisposable? BeginScope<TState>(TState state) where TState : notnull => null;

    public bool IsEnabled(LogLevel logLevel) => logLevel >= LogLevel.Information;

    public void Log<TState>(LogLevel logLevel, EventId eventId, TState state, Exception? exception, Func<TState, Exception?, string> formatter)
    {
        if (!IsEnabled(logLevel)) return;
        lock (_lock) _lines.Add((eventId.Id, formatter(state, exception)));
    }
}
