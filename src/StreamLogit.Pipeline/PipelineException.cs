namespace StreamLogit.Pipeline;

/// <summary>
/// What surrounds the engine is broken: a file, a disk, the state. Nothing after the last commit counts.
/// The message is a sentence for the person who runs the worker.
/// </summary>
public class PipelineException(string message, Exception? cause = null) : Exception(message, cause);
