using System.CommandLine;
using StreamLogit.Pipeline.Scenarios;
using StreamLogit.Worker.Output;

namespace StreamLogit.Worker.Commands;

/// <summary><c>synth</c>: makes a demo stream.</summary>
internal static class SynthCommand
{
    public static Command Create()
    {
        var scenario = new Argument<string>("SCENARIO") { Description = Describe() };
        scenario.AcceptOnlyFromAmong([.. ScenarioCatalog.Entries.Select(entry => entry.Name)]);
        var defaults = new ScenarioOptions();
        var records = new Option<long?>("--records")
        {
            Description = $"How many records, events and labels together; {defaults.Records} if not given",
            HelpName = "N",
            CustomParser = WholeNumber.Between("--records", 0, long.MaxValue),
        };
        var seed = new Option<int?>("--seed")
        {
            Description = $"Equal seeds give equal bytes; {defaults.Seed} if not given",
            HelpName = "S",
            CustomParser = WholeNumber.Between("--seed", int.MinValue, int.MaxValue),
        };
        var perDay = new Option<int?>("--events-per-day")
        {
            Description = "Events per day of the stream's own time; a rate that suits the scenario if not given",
            HelpName = "N",
            CustomParser = WholeNumber.Between("--events-per-day", 1, 86_400_000),
        };
        var truth = new Option<bool>("--truth") { Description = "Say on standard error what the best possible log-loss is" };
        var truthField = new Option<string?>("--truth-field") { Description = "Add each event's true probability under this name", HelpName = "NAME" };

        var command = new ExampleCommand(
            "synth",
            "Makes an invented stream of events and their labels, as JSON Lines on standard output",
            "streamlogit synth ferry-tickets --records 1000000 --seed 7 --truth > tickets.jsonl")
        {
            scenario, records, seed, perDay, truth, truthField,
        };
        command.SetAction((result, _) => RunAsync(
            result.GetRequiredValue(scenario),
            new ScenarioOptions
            {
                Records = result.GetValue(records) ?? defaults.Records,
                Seed = result.GetValue(seed) ?? defaults.Seed,
                EventsPerDay = result.GetValue(perDay),
                TruthField = result.GetValue(truthField),
            },
            result.GetValue(truth)));
        return command;
    }

    private static async Task<int> RunAsync(string name, ScenarioOptions options, bool tellTruth)
    {
        ScenarioWriter writer;
        try
        {
            writer = ScenarioCatalog.Create(name, options);
        }
        catch (ArgumentException exception)
        {
            throw new WrongInputException(exception.Message);
        }
        using var signals = new StopSignals();
        using var output = Console.OpenStandardOutput();
        long written = 0;
        await WorkProgress.ShowAsync(
            $"making {name}", "records",
            () => (Share(Interlocked.Read(ref written), options.Records), Interlocked.Read(ref written)),
            () =>
            {
                writer.Write(output, count => Interlocked.Exchange(ref written, count), signals.Token);
                return Task.FromResult(true);
            });
        if (tellTruth) Tell(writer.Truth);
        return ExitCode.Done;
    }

    private static double? Share(long written, long records) => records == 0 ? 1 : (double)written / records;

    private static void Tell(ScenarioTruth truth)
    {
        var table = new ResultTable("truth", "value");
        table.Add("events", FigureText.Count(truth.Events));
        table.Add("labels", FigureText.Count(truth.Labels));
        table.Add("labels bad", FigureText.Count(truth.Bad));
        table.Add("log-loss of the true probabilities", FigureText.Mean(truth.LogLoss));
        table.Add("log-loss of the base rate", FigureText.Mean(truth.BaseRateLogLoss));
        table.Add("Brier score of the true probabilities", FigureText.Mean(truth.Brier));
        table.Write(Terminal.Messages);
    }

    private static string Describe() =>
        string.Join("; ", ScenarioCatalog.Entries.Select(entry => $"{entry.Name}: {entry.Description}"));
}
