using System.CommandLine;
using System.CommandLine.Parsing;
using System.Globalization;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;
using StreamLogit.Pipeline.Replay.Backtest;

namespace StreamLogit.Worker.Commands;

/// <summary>The recordings of a command: which files, what span of them, and when their labels became known.</summary>
internal sealed class RecordingInput
{
    private readonly Argument<string[]> _recordings = new("RECORDING")
    {
        Description = "Files of records, folders of them or patterns as '2026-*.jsonl.zst', in the order in which they are to be read; - is standard input",
        Arity = ArgumentArity.OneOrMore,
    };

    private readonly Option<string?> _format = new("--format") { Description = "The format of recordings whose names do not tell it" };
    private readonly Option<DateTimeOffset?> _from = Time("--from", "Take only records from this time on");
    private readonly Option<DateTimeOffset?> _to = Time("--to", "Take only records before this time");
    private readonly Option<long?> _labelDelay = new("--label-delay")
    {
        Description = "How long after its event a label that stands in the event became known, where the event does not tell it",
        HelpName = "30d",
        CustomParser = ReadDelay,
    };

    /// <summary>Adds the argument and the options to a command.</summary>
    public RecordingInput(Command command)
    {
        _format.AcceptOnlyFromAmong("jsonl", "csv", "parquet");
        command.Add(_recordings);
        command.Add(_format);
        command.Add(_from);
        command.Add(_to);
        command.Add(_labelDelay);
    }

    /// <summary>The recordings in their order.</summary>
    /// <exception cref="WrongInputException">A name does not tell the format.</exception>
    /// <exception cref="InvalidRecordingException">A name stands for no file.</exception>
    public FileSourceOptions[] Files(ParseResult result) =>
        [.. result.GetRequiredValue(_recordings).SelectMany(path => RecordingNames.Find(new FileSourceOptions(path, FormatOf(path, result.GetValue(_format)))))];

    /// <summary>The span of the records that are taken, or null for all.</summary>
    /// <exception cref="WrongInputException">It is empty.</exception>
    public RecordSpan? Span(ParseResult result)
    {
        var (from, to) = (result.GetValue(_from), result.GetValue(_to));
        if (from >= to) throw new WrongInputException($"--from {from:O} must be before --to {to:O}.");
        return from is null && to is null ? null : new RecordSpan(Microseconds(from) ?? RecordSpan.All.FromMicroseconds, Microseconds(to) ?? RecordSpan.All.ToMicroseconds);
    }

    /// <summary>The definition with the delay of labels.</summary>
    public StreamDefinition WithLabelDelay(StreamDefinition definition, ParseResult result) => result.GetValue(_labelDelay) is { } delay
        ? definition with { Engine = definition.Engine with { Labels = definition.Engine.Labels with { DelayMicroseconds = delay } } }
        : definition;

    /// <summary>The backtest with the delay of labels.</summary>
    public BacktestOptions WithLabelDelay(BacktestOptions options, ParseResult result)
    {
        return options with { Reference = Delayed(options.Reference), Variants = [.. options.Variants.Select(Delayed)] };

        Variant Delayed(Variant variant) => variant with { Definition = WithLabelDelay(variant.Definition, result) };
    }

    /// <summary>Says so where labels were known too early.</summary>
    public static void WarnOfOptimism(long taughtAtOnce)
    {
        if (taughtAtOnce == 0) return;
        Console.Error.WriteLine(string.Create(CultureInfo.InvariantCulture,
            $"Caution: {taughtAtOnce} labels stand in their events and taught at once. Where labels come later in truth, this result is optimistic: name the field of their time (record.labelTime) or give --label-delay."));
    }

    private static RecordingFormat FormatOf(string path, string? format) => format switch
    {
        "jsonl" => RecordingFormat.JsonLines,
        "csv" => RecordingFormat.Csv,
        "parquet" => RecordingFormat.Parquet,
        _ when Directory.Exists(path) || RecordingNames.IsSeveral(path) => RecordingFormat.ByName,
        _ => RecordingFormats.OfName(path) ?? throw new WrongInputException(
            $"The name {path} does not tell the format of the recording ({RecordingFormats.KnownNames} would): add --format jsonl, csv or parquet."),
    };

    private static Option<DateTimeOffset?> Time(string name, string description) => new(name)
    {
        Description = description,
        HelpName = "2026-03-01|2026-03-01T08:15:30Z",
        CustomParser = result =>
        {
            string text = result.Tokens[0].Value;
            string[] forms = ["yyyy-MM-dd", "yyyy-MM-ddTHH:mm:ssK", "yyyy-MM-ddTHH:mm:ss.FFFFFFK"];
            if (DateTimeOffset.TryParseExact(text, forms, CultureInfo.InvariantCulture, DateTimeStyles.AssumeUniversal, out var time)) return time;
            result.AddError($"{name} takes a day or a time, as 2026-03-01 (0 h UTC) or 2026-03-01T08:15:30Z, not '{text}'.");
            return null;
        },
    };

    private static long? Microseconds(DateTimeOffset? time) => (time - DateTimeOffset.UnixEpoch)?.Ticks / TimeSpan.TicksPerMicrosecond;

    private static long? ReadDelay(ArgumentResult result)
    {
        string text = result.Tokens[0].Value;
        if (DurationText.TryParse(text, out long microseconds)) return microseconds;
        result.AddError($"--label-delay takes {DurationText.Form}, not '{text}'.");
        return null;
    }
}
