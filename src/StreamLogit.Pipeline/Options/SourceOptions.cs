namespace StreamLogit.Pipeline.Options;

/// <summary>Where the records come from.</summary>
public abstract record SourceOptions;
