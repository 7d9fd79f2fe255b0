using System.Collections.Immutable;

namespace StreamLogit.Pipeline.State;

/// <summary>What a state says about itself.</summary>
/// <param name="Stream">The stream that it belongs to.</param>
/// <param name="Definition">The definition of the last run, JSON.</param>
/// <param name="Commits">How many commits were made.</param>
/// <param name="Parts">What it is made of, and how much room each part takes.</param>
public sealed record StateInfo(string Stream, string Definition, long Commits, ImmutableArray<StatePart> Parts);
