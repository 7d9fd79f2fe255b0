namespace StreamLogit.Pipeline.Scenarios;

/// <summary>What is to be generated.</summary>
public sealed record ScenarioOptions
{
    /// <summary>How many records, events and labels together; 0 or more. Default 20,000.</summary>
    public long Records { get; init; } = 20_000;

    /// <summary>The seed: equal options give equal bytes. Default 1.</summary>
    public int Seed { get; init; } = 1;

    /// <summary>Events per day of the stream's own time, 1 to 86,400,000, or null for the scenario's own rate.</summary>
    public int? EventsPerDay { get; init; }

    /// <summary>The name of a field that gives each event's true probability, or null for none, which leaves the truth out of the records.</summary>
    public string? TruthField { get; init; }
}
