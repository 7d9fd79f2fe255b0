namespace StreamLogit.Engine.Learning;

/// <summary>The coefficient of a slot.</summary>
/// <param name="Slot">The slot.</param>
/// <param name="Feature">Its name, for people.</param>
/// <param name="Value">The coefficient.</param>
public readonly record struct FittedCoefficient(int Slot, string Feature, double Value);
