using System.CommandLine;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Options;
using StreamLogit.Pipeline.Replay.Backtest;

namespace StreamLogit.Worker.Commands;

/// <summary>The options of <c>replay</c> that try and compare something.</summary>
internal sealed class BacktestInput
{
    private const int MostVariants = 1000;

    private readonly Option<string[]> _vary = new("--vary")
    {
        Description = "Try each of these values in place of the definition's, as --vary learning.switchRate=0,1e-3; given again, every combination is tried",
        HelpName = "PATH=VALUE,...",
    };

    private readonly Option<string?> _rival = new("--rival")
    {
        Description = "Compare with the probability that somebody else gave, in this field of the events",
        HelpName = "FIELD",
    };

    private readonly Option<bool> _baselines = new("--baselines")
    {
        Description = "Compare with the base rate, and with a logistic regression of the same features refitted every midnight on 30 days",
    };

    private readonly Option<string?> _report = new("--out") { Description = "Write a report that opens in a browser", HelpName = "FILE" };
    private readonly Option<string?> _scores = new("--scores") { Description = "Write the scores of the definition as it stands, as JSON Lines", HelpName = "FILE" };

    /// <summary>Adds the options to a command.</summary>
    public BacktestInput(Command command)
    {
        command.Add(_vary);
        command.Add(_rival);
        command.Add(_baselines);
        command.Add(_report);
        command.Add(_scores);
    }

    /// <summary>Whether any of them is given.</summary>
    public bool IsGiven(ParseResult result) =>
        result.GetValue(_vary) is { Length: > 0 } || result.GetValue(_rival) is not null || result.GetValue(_baselines)
        || Report(result) is not null || result.GetValue(_scores) is not null;

    /// <summary>The file of the report, or null.</summary>
    public string? Report(ParseResult result) => result.GetValue(_report);

    /// <summary>The files that are to be written.</summary>
    public IEnumerable<string> Outputs(ParseResult result) => new[] { Report(result), result.GetValue(_scores) }.OfType<string>();

    /// <summary>Reads the variants.</summary>
    /// <exception cref="DefinitionException">A variant cannot be used.</exception>
    /// <exception cref="WrongInputException">An option cannot be used.</exception>
    public BacktestOptions Read(ParseResult result, DefinitionInput definition)
    {
        var paths = (result.GetValue(_vary) ?? []).Select(ParsePath).ToList();
        if (paths.GroupBy(path => path.Path).FirstOrDefault(same => same.Count() > 1) is { } twice)
            throw new WrongInputException($"--vary names {twice.Key} twice: give all its values at once, separated by commas.");
        double count = paths.Aggregate(1.0, (product, path) => product * path.Values.Length);
        if (count > MostVariants) throw new WrongInputException($"--vary gives {count:F0} combinations; at most {MostVariants} are tried.");
        return new BacktestOptions
        {
            Reference = new Variant("as it stands", definition.Read(result, DefinitionUse.Replay)),
            Variants =
            [
                .. VariedPath.Product(paths).Select(overrides =>
                    new Variant(string.Join(", ", overrides), definition.Read(result, DefinitionUse.Replay, overrides))),
            ],
            RivalField = result.GetValue(_rival),
            Baselines = result.GetValue(_baselines),
            Scores = result.GetValue(_scores) is { } scores ? new FileOutputOptions(scores) : null,
        };
    }

    private static VariedPath ParsePath(string text)
    {
        try
        {
            return VariedPath.Parse(text);
        }
        catch (FormatException e)
        {
            throw new WrongInputException($"--vary {text} cannot be used: {e.Message}.");
        }
    }
}
