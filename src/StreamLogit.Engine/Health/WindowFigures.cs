namespace StreamLogit.Engine.Health;

/// <summary>Figures over a window.</summary>
/// <param name="Name">The window as the definition writes it, or <c>last 10000 labels</c>.</param>
/// <param name="Figures">Its figures.</param>
public sealed record WindowFigures(string Name, HealthFigures Figures);
