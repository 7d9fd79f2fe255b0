using System.Collections.Immutable;

namespace StreamLogit.Pipeline.Scenarios;

/// <summary>The scenarios that can be generated.</summary>
public static class ScenarioCatalog
{
    /// <summary>Their names, each with what it is.</summary>
    public static ImmutableArray<(string Name, string Description)> Entries { get; } =
    [
        ("ferry-tickets", "card payments for ferry tickets: 1 % stolen cards, labels 2 to 30 days late, a new kind of fraud midway"),
        ("pump-stations", "readings of water pumps: bearings wear slowly, labels hours late, one vibration sensor replaced midway"),
    ];

    /// <summary>Makes a scenario, which writes its records to a stream.</summary>
    /// <exception cref="ArgumentException">The name is unknown, or the options are out of their ranges.</exception>
    public static ScenarioWriter Create(string name, ScenarioOptions options)
    {
        ArgumentNullException.ThrowIfNull(options);
        ArgumentOutOfRangeException.ThrowIfNegative(options.Records);
        if (options.EventsPerDay is { } perDay)
        {
            ArgumentOutOfRangeException.ThrowIfLessThan(perDay, 1);
            ArgumentOutOfRangeException.ThrowIfGreaterThan(perDay, 86_400_000);
        }
        return name switch
        {
            "ferry-tickets" => Create(FerryTickets.DefaultEventsPerDay, "t-", (perDay, seed) => new FerryTickets(perDay, seed)),
            "pump-stations" => Create(PumpStations.DefaultEventsPerDay, "r-", (perDay, seed) => new PumpStations(perDay, seed)),
            _ => throw new ArgumentException($"There is no scenario '{name}'."),
        };

        ScenarioWriter Create(int defaultPerDay, string idPrefix, Func<int, int, IScenario> make)
        {
            int perDay = options.EventsPerDay ?? defaultPerDay;
            if (options.Records / perDay > ScenarioCalendar.MaximumDays)
                throw new ArgumentException("The stream would outlast the year 9999: ask for fewer records or for more events per day.");
            var scenario = make(perDay, options.Seed);
            if (options.TruthField is { } field && (field is "" or "id" or "time" or "label" || scenario.Fields.Contains(field)))
                throw new ArgumentException($"The events have a field '{field}' already, or cannot have one: give the true probability another name.");
            return new ScenarioWriter(scenario, options, idPrefix);
        }
    }
}
