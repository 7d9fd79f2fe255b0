namespace StreamLogit.Engine.Health.RollUps;

/// <summary>One level of a roll-up.</summary>
/// <param name="Minutes">The length of its buckets; a multiple of that of the level before.</param>
/// <param name="Buckets">How many closed buckets keep their numbers.</param>
/// <param name="Tallies">How many of those keep their tallies too.</param>
internal readonly record struct RollUpRetention(int Minutes, int Buckets, int Tallies);
