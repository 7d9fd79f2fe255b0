namespace StreamLogit.Pipeline.Scenarios;

/// <summary>An event of a scenario.</summary>
/// <param name="Milliseconds">Its time, in milliseconds since 1970.</param>
/// <param name="Probability">The probability, given everything in the scenario, that it is bad.</param>
internal readonly record struct ScenarioEvent(long Milliseconds, double Probability);
