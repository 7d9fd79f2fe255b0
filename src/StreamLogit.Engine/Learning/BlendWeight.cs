namespace StreamLogit.Engine.Learning;

/// <summary>A setting's weight in the blend.</summary>
public readonly record struct BlendWeight(string Name, double Weight);
