using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Records;

namespace StreamLogit.Pipeline;

/// <summary>Takes what came of batches of records: the scores, or the rejects among the records. One thread at a time uses it.</summary>
public interface IScoreSink : IDisposable
{
    /// <summary>What it is among the outputs of a worker, for messages and for the state: <c>scores</c>, <c>rejects</c>.</summary>
    string Name { get; }

    /// <summary>What carries what is written, for telemetry.</summary>
    string MessagingSystem => "file";

    /// <summary>The topic that it goes to, for telemetry, or null.</summary>
    string? Destination => null;

    /// <summary>Begins, before the first write, and again where a run goes back to its state. What was written after the last commit is taken back.</summary>
    /// <param name="mark">What <see cref="Flush"/> returned for that commit, or null where there was none.</param>
    /// <exception cref="PipelineException">What was committed is not there any more, or there is something that was never committed.</exception>
    void Start(long? mark);

    /// <summary>Takes a batch in the order of the stream.</summary>
    /// <exception cref="PipelineException">It cannot be written.</exception>
    void Write(RecordBatch records, ScoreBatch scores);

    /// <summary>
    /// Takes a batch that was written before, after the last commit of the state, and whose scores were committed in a transaction. What was taken back at the start
    /// is written again; what belongs to the transaction stands.
    /// </summary>
    /// <exception cref="PipelineException">It cannot be written.</exception>
    void Repeat(RecordBatch records, ScoreBatch scores) => Write(records, scores);

    /// <summary>Makes durable all that was written, and returns the mark from which to go on: the length of a file in bytes.</summary>
    /// <exception cref="PipelineException">It cannot be made durable.</exception>
    long Flush();
}
