namespace StreamLogit.Pipeline.Transactions;

/// <summary>
/// A transaction was taken back, or nobody knows what became of it, while the engine has learned from it already. The run goes on from its state, as after
/// a restart.
/// </summary>
public sealed class RewindException(string message, Exception? cause = null) : PipelineException(message, cause);
