using System.Runtime.ExceptionServices;
using System.Threading.Channels;

namespace StreamLogit.Pipeline.Stages;

/// <summary>
/// The channels between the stages, and a fixed number of batches that go round in them: from the empty ones to the reader, the
/// engine, the writer and back. A stage that fails closes all channels; the others end when they find theirs closed.
/// </summary>
/// <remarks>
/// Stages are stopped by closing channels and not by cancellation, because a wait on a channel allocates only where it can be
/// cancelled. Batches that lie in the channels at a failure may still be scored and written, but nothing is committed after it.
/// </remarks>
internal sealed class Conveyor
{
    private ExceptionDispatchInfo? _fault;

    public Conveyor(int batches, Func<BatchInFlight> create)
    {
        Empty = Channel(batches);
        Read = Channel(batches);
        Scored = Channel(batches);
        for (int i = 0; i < batches; i++) Empty.Writer.TryWrite(create());
    }

    /// <summary>Batches for the reader to fill.</summary>
    public Channel<BatchInFlight> Empty { get; }

    /// <summary>Batches for the engine to score.</summary>
    public Channel<BatchInFlight> Read { get; }

    /// <summary>Batches for the writer to write.</summary>
    public Channel<BatchInFlight> Scored { get; }

    /// <summary>Runs a stage on a task of its own.</summary>
    public Task Start(Func<Task> stage, CancellationTokenSource stopReading) => Task.Run(async () =>
    {
        try
        {
            await stage().ConfigureAwait(false);
        }
        catch (ChannelClosedException)
        {
            // Another stage failed and has said why.
        }
#pragma warning disable CA1031 // Whatever it is, it surfaces: the loop throws it when all stages have ended.
        catch (Exception e)
#pragma warning restore CA1031
        {
            Interlocked.CompareExchange(ref _fault, ExceptionDispatchInfo.Capture(e), null);
            Empty.Writer.TryComplete();
            Read.Writer.TryComplete();
            Scored.Writer.TryComplete();
            await stopReading.CancelAsync().ConfigureAwait(false);
        }
    });

    /// <summary>Throws what the first stage that failed threw, if one did.</summary>
    public void ThrowFault() => Volatile.Read(ref _fault)?.Throw();

    private static Channel<BatchInFlight> Channel(int capacity) => System.Threading.Channels.Channel.CreateBounded<BatchInFlight>(
        new BoundedChannelOptions(capacity)
        {
            FullMode = BoundedChannelFullMode.Wait,
            SingleReader = true,
            SingleWriter = true,
        });
}
