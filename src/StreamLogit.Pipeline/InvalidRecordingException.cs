namespace StreamLogit.Pipeline;

/// <summary>A recording that cannot be read as what it is said to be: it is not there, or its header is wrong.</summary>
public sealed class InvalidRecordingException(string message, Exception? cause = null) : PipelineException(message, cause);
