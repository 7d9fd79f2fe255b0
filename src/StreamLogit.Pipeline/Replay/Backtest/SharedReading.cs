using System.Threading.Channels;
using StreamLogit.Engine.Records;

namespace StreamLogit.Pipeline.Replay.Backtest;

/// <summary>Reads and decodes records once for all engines, ahead of them by two batches at most.</summary>
internal sealed class SharedReading
{
    // Large enough that engines on several cores seldom wait for each other at its end.
    private const int BatchSize = 4096;
    private const int Batches = 3;
    private readonly IRecordSource _source;
    private readonly RecordDecoder[] _decoders;
    private readonly RecordDecoder? _rival;
    private readonly Action<RecordBatch>[] _cutters;
    private readonly Channel<SharedBatch> _empty = Channel.CreateBounded<SharedBatch>(Batches);
    private readonly Channel<SharedBatch> _decoded = Channel.CreateBounded<SharedBatch>(Batches);

    public SharedReading(IRecordSource source, IReadOnlyList<RecordSchema> schemas, RecordSchema? rival, RecordSpan? span)
    {
        _source = source;
        _decoders = [.. schemas.Select(schema => new RecordDecoder(schema))];
        _rival = rival is null ? null : new RecordDecoder(rival);
        _cutters = span is null ? [] : [.. schemas.Select(_ => span.Cutter())];
        for (int i = 0; i < Batches; i++) _empty.Writer.TryWrite(new SharedBatch(schemas, rival));
    }

    /// <summary>Whether the recordings were read to their end.</summary>
    public bool HasEnded { get; private set; }

    public ChannelReader<SharedBatch> Decoded => _decoded.Reader;

    /// <summary>Gives a batch back to be filled again.</summary>
    public void Return(SharedBatch batch) => _empty.Writer.TryWrite(batch);

    /// <summary>Reads until the end or until it is stopped, neither of which is an error.</summary>
    public async Task RunAsync(CancellationToken stop)
    {
        try
        {
            while (!stop.IsCancellationRequested)
            {
                var batch = await _empty.Reader.ReadAsync(CancellationToken.None).ConfigureAwait(false);
                if (!await FillAsync(batch, stop).ConfigureAwait(false)) break;
                await _decoded.Writer.WriteAsync(batch, CancellationToken.None).ConfigureAwait(false);
            }
            _decoded.Writer.Complete();
        }
#pragma warning disable CA1031 // Whatever it is, it surfaces where the batches are awaited.
        catch (Exception e)
#pragma warning restore CA1031
        {
            _decoded.Writer.Complete(e);
        }
    }

    private async ValueTask<bool> FillAsync(SharedBatch batch, CancellationToken stop)
    {
        var raw = batch.BySchema[0];
        raw.Clear();
        while (raw.Count == 0)
        {
            if (stop.IsCancellationRequested) return false;
            HasEnded = await _source.FillAsync(raw, BatchSize, stop).ConfigureAwait(false) == FillOutcome.Ended;
            if (HasEnded) return false;
        }
        // Copied before they are decoded, as decoding adds unescaped texts.
        foreach (var other in batch.BySchema.AsSpan(1)) other.CopyFrom(raw);
        batch.Rival?.CopyFrom(raw);
        for (int i = 0; i < _decoders.Length; i++) _decoders[i].Decode(batch.BySchema[i]);
        for (int i = 0; i < _cutters.Length; i++) _cutters[i](batch.BySchema[i]);
        if (batch.Rival is not null) _rival!.Decode(batch.Rival);
        return true;
    }
}
