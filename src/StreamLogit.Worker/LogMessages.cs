using Microsoft.Extensions.Logging;

namespace StreamLogit.Worker;

/// <summary>Everything that a running worker logs.</summary>
internal static partial class LogMessages
{
    [LoggerMessage(1, LogLevel.Information, "Stream {Stream}: begins with a new state")]
    public static partial void Begins(this ILogger logger, string stream);

    [LoggerMessage(2, LogLevel.Information, "Stream {Stream}: goes on after {Records} records and {Labelled} labels of earlier runs")]
    public static partial void GoesOn(this ILogger logger, string stream, long records, long labelled);

    [LoggerMessage(3, LogLevel.Information, "Stream {Stream}: {Records} records in this run, {Awaiting} events awaiting their labels, {Rejected} rejects so far, log-loss {LogLoss:F5} against {BaseRateLogLoss:F5} of the base rate")]
    public static partial void Runs(
        this ILogger logger, string stream, long records, long awaiting, long rejected, double logLoss, double baseRateLogLoss);

    [LoggerMessage(4, LogLevel.Information, "Stream {Stream}: the source has ended and all is committed")]
    public static partial void Ended(this ILogger logger, string stream);

    [LoggerMessage(5, LogLevel.Information, "Stream {Stream}: stopped on request and all is committed")]
    public static partial void Stopped(this ILogger logger, string stream);

    [LoggerMessage(6, LogLevel.Information, "Stream {Stream}: the bank has changed. {Kept} settings go on; started from the blend of the state: [{Started}]; dropped: [{Dropped}]")]
    public static partial void BankChanged(this ILogger logger, string stream, int kept, string started, string dropped);

    [LoggerMessage(7, LogLevel.Information, "The health page is at {Address}")]
    public static partial void Listens(this ILogger logger, string address);
}
