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

    [LoggerMessage(20, LogLevel.Warning, "Stream {Stream}: goes back to its last commit and forward again: {Reason}")]
    public static partial void GoesBack(this ILogger logger, string stream, string reason);

    [LoggerMessage(7, LogLevel.Information, "The health page is at {Address}")]
    public static partial void Listens(this ILogger logger, string address);

    [LoggerMessage(20, LogLevel.Warning, "Stream {Stream}: alarm '{Alarm}' is raised. {Sentence}")]
    public static partial void AlarmRaised(this ILogger logger, string stream, string alarm, string sentence);

    [LoggerMessage(21, LogLevel.Information, "Stream {Stream}: alarm '{Alarm}' is quiet again. {Sentence}")]
    public static partial void AlarmQuiet(this ILogger logger, string stream, string alarm, string sentence);

    [LoggerMessage(22, LogLevel.Warning, "Stream {Stream}: {Changes} changes of alarms came too fast to be told one by one; the state of every alarm is right")]
    public static partial void ChangesPassed(this ILogger logger, string stream, long changes);

    [LoggerMessage(23, LogLevel.Warning, "The webhook does not take a change of an alarm: {Reason}. Attempt {Attempt} failed; the next follows in {Delay}")]
    public static partial void NoticeRetried(this ILogger logger, int attempt, string reason, TimeSpan delay);

    [LoggerMessage(24, LogLevel.Error, "The webhook refuses change {Number} of alarm '{Alarm}' with status {Status}; it is not sent again")]
    public static partial void NoticeRefused(this ILogger logger, long number, string alarm, int status);

    [LoggerMessage(25, LogLevel.Error, "Change {Number} of alarm '{Alarm}' was not sent to the webhook, which was out of order for too long: {Reason}")]
    public static partial void NoticeGivenUp(this ILogger logger, long number, string alarm, string reason);

    [LoggerMessage(26, LogLevel.Error, "Change {Number} of alarm '{Alarm}' was not sent to the webhook: too many wait already")]
    public static partial void NoticeDropped(this ILogger logger, long number, string alarm);

    [LoggerMessage(27, LogLevel.Warning, "{Changes} changes of alarms are still to be sent to the webhook; the next run sends them")]
    public static partial void NoticesLeft(this ILogger logger, int changes);

    [LoggerMessage(28, LogLevel.Warning, "What was sent to the webhook could not be noted, so it may be sent once more: {Reason}")]
    public static partial void MarkNotWritten(this ILogger logger, string reason);
}
