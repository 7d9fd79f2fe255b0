namespace StreamLogit.Pipeline.Options;

/// <summary>Where the state of a worker is kept and how often it is committed. A commit falls due with whichever limit is reached first.</summary>
/// <param name="Folder">The folder of the state, of which only one worker at a time has the use. It is made where it is missing.</param>
/// <param name="EveryEvents">Records between two commits, 1 or more. Default 100,000.</param>
/// <param name="EveryTime">Wall time between two commits, above 0. Default 10 s.</param>
public sealed record StateOptions(string Folder, int EveryEvents, TimeSpan EveryTime)
{
    /// <summary>A state with the default pace of commits.</summary>
    public StateOptions(string folder) : this(folder, 100_000, TimeSpan.FromSeconds(10)) { }
}
