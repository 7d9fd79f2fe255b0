using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Browser.Tests.Running;

/// <summary>A served demo stream that the tests of a class share and only look at.</summary>
public sealed class ServedFerryTickets : IDisposable
{
    private readonly ServedStream _stream = ServedStream.OfFerryTickets();

    public string Address => _stream.Address;

    public void Dispose() => _stream.Dispose();
}
