using StreamLogit.Engine.Records;

namespace StreamLogit.Pipeline;

/// <summary>Gives the records of a stream in their order. One thread at a time uses it, except where a member says otherwise.</summary>
public interface IRecordSource : IDisposable
{
    /// <summary>The position after the last record given.</summary>
    SourcePosition Position { get; }

    /// <summary>How much has been read. Any thread may ask.</summary>
    SourceProgress Progress { get; }

    /// <summary>What carries the records, for telemetry.</summary>
    string MessagingSystem => "file";

    /// <summary>The one topic that they come from, for telemetry, or null.</summary>
    string? Destination => null;

    /// <summary>
    /// Goes to a position that this source, or an earlier one of the same origins, gave. Before the first fill; sources of transactions also where a run goes
    /// back to its state.
    /// </summary>
    /// <exception cref="PipelineException">What was read up to there is not there any more.</exception>
    void Seek(SourcePosition position);

    /// <summary>
    /// Adds records to an empty batch, at least one and at most <paramref name="maximumRecords"/>, and names their origin.
    /// Waits only as long as there is none, a fraction of a second at most, and then says that it is idle; so too, without an exception,
    /// when <paramref name="cancellation"/> is requested.
    /// </summary>
    /// <exception cref="PipelineException">The source cannot be read.</exception>
    ValueTask<FillOutcome> FillAsync(RecordBatch batch, int maximumRecords, CancellationToken cancellation);

    /// <summary>Hears that a commit holds a position which this source gave. From any thread.</summary>
    void Committed(SourcePosition position) { }
}
