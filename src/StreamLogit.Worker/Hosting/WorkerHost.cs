using Microsoft.Extensions.Configuration;
using Microsoft.Extensions.DependencyInjection;
using Microsoft.Extensions.Hosting;
using Microsoft.Extensions.Logging;
using Microsoft.Extensions.Logging.Console;
using StreamLogit.Pipeline;
using StreamLogit.Worker.Output;

namespace StreamLogit.Worker.Hosting;

/// <summary>Hosts the run of a stream: signals and logging.</summary>
internal static class WorkerHost
{
    // A commit on a slow disk must not be cut short. Were it, the next run would go on from the commit before.
    private static readonly TimeSpan ShutdownTimeout = TimeSpan.FromMinutes(2);

    /// <summary>Runs until the source ends or the process is asked to stop; either way it ends with a commit.</summary>
    /// <exception cref="PipelineException">What surrounds the engine is broken.</exception>
    public static async Task RunAsync(StreamRun run)
    {
        // Configuration is read once: to watch its files is to watch every folder below the one that the program was started in.
        var once = new ConfigurationManager();
        once.AddInMemoryCollection([new("hostBuilder:reloadConfigOnChange", "false")]);
        var builder = Host.CreateApplicationBuilder(new HostApplicationBuilderSettings { Configuration = once });
        builder.Logging.ClearProviders();
        builder.Logging.AddSimpleConsole(options =>
        {
            options.SingleLine = true;
            options.TimestampFormat = "yyyy-MM-dd'T'HH:mm:ss.fffzzz ";
            options.ColorBehavior = Terminal.Messages.IsInteractive ? LoggerColorBehavior.Default : LoggerColorBehavior.Disabled;
        });
        // Standard output is for results.
        builder.Services.Configure<ConsoleLoggerOptions>(options => options.LogToStandardErrorThreshold = LogLevel.Trace);
        builder.Logging.AddFilter("Microsoft.Hosting.Lifetime", LogLevel.Warning);
        // A fault of the service is thrown below, and said once.
        builder.Logging.AddFilter("Microsoft.Extensions.Hosting.Internal.Host", LogLevel.None);
        builder.Services.Configure<HostOptions>(options => options.ShutdownTimeout = ShutdownTimeout);
        builder.Services.AddSingleton(TimeProvider.System);
        builder.Services.AddSingleton(run);
        builder.Services.AddHostedService<WorkerService>();

        using var host = builder.Build();
        var service = host.Services.GetServices<IHostedService>().OfType<WorkerService>().Single();
        await host.RunAsync();
        await service.ExecuteTask!;
    }
}
