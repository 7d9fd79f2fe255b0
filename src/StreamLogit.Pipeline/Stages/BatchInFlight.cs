using System.Diagnostics;
using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Persistence;
using StreamLogit.Engine.Records;

namespace StreamLogit.Pipeline.Stages;

/// <summary>A batch on its way through the stages: records, and later their scores. Used again and again.</summary>
internal sealed class BatchInFlight(RecordBatch records, ScoreBatch scores)
{
    public RecordBatch Records { get; } = records;

    public ScoreBatch Scores { get; } = scores;

    /// <summary>Where the source goes on after this batch, if a commit follows it.</summary>
    public SourcePosition? CommitAt { get; set; }

    /// <summary>Whether a transaction ends with this batch.</summary>
    public bool IsTransactionDue { get; set; }

    /// <summary>Whether its records are given again, so that their scores are committed already.</summary>
    public bool IsRepeated { get; set; }

    /// <summary>What changed in the engine since the last commit, if a commit follows this batch.</summary>
    public StateBlocks? Changes { get; set; }

    /// <summary>Whether nothing follows for a while, so that health is to be published now.</summary>
    public bool IsPause { get; set; }

    /// <summary>Whether the stream ends here.</summary>
    public bool IsEnd { get; set; }

    /// <summary>When it had been read, as a timestamp.</summary>
    public long ReadAt { get; set; }

    /// <summary>Its trace, or null where nobody listens.</summary>
    public Activity? Trace { get; set; }

    public void Clear()
    {
        Records.Clear();
        Scores.Clear();
        CommitAt = null;
        Changes = null;
        IsTransactionDue = false;
        IsRepeated = false;
        IsPause = false;
        IsEnd = false;
    }
}
