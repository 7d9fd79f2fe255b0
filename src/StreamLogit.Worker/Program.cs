using System.CommandLine;
using System.CommandLine.Invocation;
using System.Text;
using StreamLogit.Engine.Persistence;
using StreamLogit.Kafka;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Worker;
using StreamLogit.Worker.Commands;

Console.OutputEncoding = new UTF8Encoding(encoderShouldEmitUTF8Identifier: false);
try
{
    var command = StreamLogitCommand.Create();
    // An argument is what was typed: "@name" is no file of arguments, and "-ab" is not two options.
    var result = command.Parse(args, new ParserConfiguration { ResponseFileTokenReplacer = null, EnablePosixBundling = false });
    if (result.Action is ParseErrorAction) return Refuse(result);
    return await result.InvokeAsync(new InvocationConfiguration { EnableDefaultExceptionHandler = false, ProcessTerminationTimeout = null });
}
catch (DefinitionException exception)
{
    return Fail($"the definition cannot be used\n{exception.Message}", ExitCode.WrongInput);
}
catch (Exception exception) when (exception is WrongInputException or KafkaSettingsException or InvalidRecordingException or InvalidStateException)
{
    return Fail(exception.Message, ExitCode.WrongInput);
}
catch (OperationCanceledException)
{
    return Fail("stopped before it was done", ExitCode.Failed);
}
catch (Exception exception) when (exception is PipelineException or IOException or UnauthorizedAccessException)
{
    return Fail(exception.Message, ExitCode.Failed);
}
catch (OutOfMemoryException)
{
    return Fail("there is not enough memory for this; check says what a definition needs", ExitCode.Failed);
}
catch (Exception exception)
{
    // Nothing that is expected: what happened, in full, for a report.
    return Fail(exception.ToString(), ExitCode.Failed);
}

static int Refuse(ParseResult result)
{
    string command = result.CommandResult.Command is RootCommand ? "" : $" {result.CommandResult.Command.Name}";
    // What else is said about a line with an unknown word mostly follows from that word.
    if (result.UnmatchedTokens.Count > 0)
        Console.Error.WriteLine($"streamlogit: '{result.UnmatchedTokens[0]}' is not known to streamlogit{command}");
    else
        foreach (string message in result.Errors.Select(error => error.Message).Distinct()) Console.Error.WriteLine($"streamlogit: {message}");
    Console.Error.WriteLine($"See: streamlogit{command} --help");
    return ExitCode.WrongInput;
}

static int Fail(string message, int exitCode)
{
    Console.Error.WriteLine($"streamlogit: {message}");
    return exitCode;
}
