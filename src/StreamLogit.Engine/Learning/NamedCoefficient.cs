namespace StreamLogit.Engine.Learning;

/// <summary>A coefficient: <c>amount</c>, <c>amount missing</c>, <c>country=QX</c>.</summary>
public readonly record struct NamedCoefficient(string Feature, double Value);
