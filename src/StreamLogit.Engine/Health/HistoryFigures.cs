namespace StreamLogit.Engine.Health;

/// <summary>How the memory of histories is doing.</summary>
/// <param name="Keys">Keys whose rows are in memory.</param>
/// <param name="MemoryBytes">Bytes that they take.</param>
/// <param name="Lookups">Keys looked up, for events and for labels.</param>
/// <param name="Misses">Lookups whose row had been put out and had to come back.</param>
/// <param name="Evictions">Rows put out.</param>
public sealed record HistoryFigures(long Keys, long MemoryBytes, long Lookups, long Misses, long Evictions);
