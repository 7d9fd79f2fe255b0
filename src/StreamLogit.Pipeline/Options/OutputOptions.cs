namespace StreamLogit.Pipeline.Options;

/// <summary>Where scores or rejects go.</summary>
public abstract record OutputOptions
{
    /// <summary>What it is, for a person.</summary>
    public abstract string InWords { get; }
}
