using System.Runtime.InteropServices;

namespace StreamLogit.Worker.Commands;

/// <summary>Turns Ctrl-C and SIGTERM into a request to stop, as long as it is not disposed of.</summary>
internal sealed class StopSignals : IDisposable
{
    private readonly CancellationTokenSource _source = new();
    private readonly PosixSignalRegistration[] _registrations;

    public StopSignals() => _registrations =
    [
        PosixSignalRegistration.Create(PosixSignal.SIGINT, Stop),
        PosixSignalRegistration.Create(PosixSignal.SIGTERM, Stop),
    ];

    /// <summary>Is cancelled at the first signal. A second one ends the process at once.</summary>
    public CancellationToken Token => _source.Token;

    public void Dispose()
    {
        foreach (var registration in _registrations) registration.Dispose();
        _source.Dispose();
    }

    private void Stop(PosixSignalContext context)
    {
        if (_source.IsCancellationRequested) return;
        context.Cancel = true;
        _source.Cancel();
    }
}
