using System.Collections.Immutable;

namespace StreamLogit.Pipeline.Transactions;

/// <summary>
/// The transactions of a log in which what the sinks write, and how far the source was read, are committed together: all of it or nothing. They
/// are shorter than the time between two commits of the state.
/// </summary>
/// <remarks>
/// Before each of them is committed its records are written into the journal of the state, in their order. A run that goes on from a state older than the log
/// has the source give those records again in that order, so that the engine comes to where it was, and then goes on behind them.
/// </remarks>
public interface IStreamTransaction
{
    /// <summary>Whether the next batch of the source is of records that are given again. Asked by who fills batches.</summary>
    bool IsRepeating { get; }

    /// <summary>Ends what an earlier run, or this one before a fault, has left open. From then on no earlier run can commit anything.</summary>
    /// <exception cref="PipelineException">The log cannot be reached, or another worker has taken over.</exception>
    void Recover();

    /// <summary>Whether a transaction that took those spans was committed. Only between recovery and the first batch.</summary>
    /// <exception cref="PipelineException">The log does not say.</exception>
    bool IsCommitted(ImmutableArray<OriginSpan> spans);

    /// <summary>Has the source give records again first. Only between recovery and the first batch.</summary>
    void Repeat(ImmutableArray<JournalEntry> journal);

    /// <summary>Commits what was written since the last call, and that those spans were read.</summary>
    /// <exception cref="RewindException">Nothing of it was committed, or nobody knows; the run goes on from its state.</exception>
    /// <exception cref="PipelineException">It cannot be committed, and a further try would not help.</exception>
    void Commit(ImmutableArray<OriginSpan> spans);
}
