using StreamLogit.Engine.Records;

namespace StreamLogit.Pipeline.Tests.Stages;

/// <summary>A source that may die before each fill.</summary>
internal sealed class DyingSource(IRecordSource inner, Death death) : IRecordSource
{
    public SourcePosition Position => inner.Position;

    public SourceProgress Progress => inner.Progress;

    public void Seek(SourcePosition position) => inner.Seek(position);

    public ValueTask<FillOutcome> FillAsync(RecordBatch batch, int maximumRecords, CancellationToken cancellation)
    {
        death.Step();
        return inner.FillAsync(batch, maximumRecords, cancellation);
    }

    public void Dispose() => inner.Dispose();
}
