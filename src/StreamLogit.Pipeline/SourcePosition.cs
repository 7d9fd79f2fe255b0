using System.Collections.Immutable;

namespace StreamLogit.Pipeline;

/// <summary>From where a source goes on: the position in each of its origins that was begun, in the source's order.</summary>
/// <param name="Origins">The positions; empty before the first record, and for a source that cannot be read twice.</param>
public sealed record SourcePosition(ImmutableArray<OriginPosition> Origins)
{
    /// <summary>Before the first record.</summary>
    public static SourcePosition Start { get; } = new([]);
}
