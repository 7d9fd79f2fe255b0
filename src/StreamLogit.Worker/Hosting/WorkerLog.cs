using Microsoft.Extensions.Configuration;
using Microsoft.Extensions.DependencyInjection;
using Microsoft.Extensions.Logging;
using Microsoft.Extensions.Logging.Console;
using StreamLogit.Worker.Output;

namespace StreamLogit.Worker.Hosting;

/// <summary>The log of the program: lines on standard error, because standard output is for results.</summary>
internal static class WorkerLog
{
    /// <summary>A log for what is opened before there is a host, and for commands without one.</summary>
    public static ILoggerFactory Create() => LoggerFactory.Create(builder =>
    {
        builder.AddConfiguration(new ConfigurationBuilder().AddEnvironmentVariables().Build().GetSection("Logging"));
        Write(builder);
    });

    /// <summary>Has a log written so.</summary>
    public static void Write(ILoggingBuilder builder)
    {
        builder.AddSimpleConsole(options =>
        {
            options.SingleLine = true;
            options.TimestampFormat = "yyyy-MM-dd'T'HH:mm:ss.fffzzz ";
            options.ColorBehavior = Terminal.Messages.IsInteractive ? LoggerColorBehavior.Default : LoggerColorBehavior.Disabled;
        });
        builder.Services.Configure<ConsoleLoggerOptions>(options => options.LogToStandardErrorThreshold = LogLevel.Trace);
    }
}
