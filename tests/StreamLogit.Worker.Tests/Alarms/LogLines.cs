using System.Collections.Concurrent;
using Microsoft.Extensions.Logging;

namespace StreamLogit.Worker.Tests.Alarms;

/// <summary>A log that keeps its lines.</summary>
internal sealed class LogLines<T> : ILogger<T>
{
    public ConcurrentQueue<(LogLevel Level, string Text)> Lines { get; } = [];

    public IDisposable? BeginScope<TState>(TState state) where TState : notnull => null;

    public bool IsEnabled(LogLevel logLevel) => true;

    public void Log<TState>(LogLevel logLevel, EventId eventId, TState state, Exception? exception, Func<TState, Exception?, string> formatter) =>
        Lines.Enqueue((logLevel, formatter(state, exception)));
}
