using StreamLogit.Engine.Records;

namespace StreamLogit.Pipeline.Replay.Backtest;

/// <summary>A batch decoded once for each schema among the engines, and once more for the rival's field.</summary>
internal sealed class SharedBatch(IEnumerable<RecordSchema> schemas, RecordSchema? rival)
{
    public RecordBatch[] BySchema { get; } = [.. schemas.Select(schema => new RecordBatch(schema))];

    public RecordBatch? Rival { get; } = rival is null ? null : new RecordBatch(rival);
}
