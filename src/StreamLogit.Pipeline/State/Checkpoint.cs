using System.Collections.Immutable;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Pipeline.State;

/// <summary>All that a worker goes on from, as of one moment of its stream.</summary>
/// <param name="Position">Where the source goes on.</param>
/// <param name="Marks">The mark of every output, by its name.</param>
/// <param name="Blocks">The state of the engine; in a commit only what changed since the one before.</param>
public sealed record Checkpoint(SourcePosition Position, ImmutableSortedDictionary<string, long> Marks, StateBlocks Blocks);
