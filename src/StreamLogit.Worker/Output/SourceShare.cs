using StreamLogit.Pipeline;

namespace StreamLogit.Worker.Output;

/// <summary>How much of a source is done, as progress shows it.</summary>
internal static class SourceShare
{
    /// <summary>The share read, 0 to 1, or null where nobody knows the whole.</summary>
    public static double? Share(this SourceProgress progress) => progress.TotalBytes switch
    {
        null => null,
        0 => 1,
        var total => Math.Min(1, (double)progress.Bytes / total.Value),
    };
}
