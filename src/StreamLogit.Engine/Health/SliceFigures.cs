using System.Collections.Immutable;

namespace StreamLogit.Engine.Health;

/// <summary>The labels of the events that had one value of a field.</summary>
/// <param name="Field">The path of the field.</param>
/// <param name="Value">The value, at most its first 47 bytes, <c>(missing)</c> where there was none; null for all values without figures of their own together.</param>
/// <param name="Total">The figures since the value has figures of its own.</param>
/// <param name="Windows">The figures over the windows of the stream's clock.</param>
/// <param name="History">How they went over time.</param>
public sealed record SliceFigures(
    string Field, string? Value, HealthFigures Total, ImmutableArray<WindowFigures> Windows, HealthHistory History);
