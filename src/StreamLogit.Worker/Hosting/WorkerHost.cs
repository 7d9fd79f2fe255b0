using Microsoft.AspNetCore.Builder;
using Microsoft.Extensions.Configuration;
using Microsoft.Extensions.DependencyInjection;
using Microsoft.Extensions.Hosting;
using Microsoft.Extensions.Logging;
using StreamLogit.Pipeline;
using StreamLogit.Worker.Alarms;
using StreamLogit.Worker.Telemetry;
using StreamLogit.Worker.Web;

namespace StreamLogit.Worker.Hosting;

/// <summary>Hosts the run of a stream: signals, logging and, where the definition asks for it, the page.</summary>
internal static class WorkerHost
{
    // A commit on a slow disk must not be cut short. Were it, the next run would go on from the commit before.
    private static readonly TimeSpan ShutdownTimeout = TimeSpan.FromMinutes(2);

    /// <summary>Runs until the source ends or the process is asked to stop; either way it ends with a commit.</summary>
    /// <param name="run">The run.</param>
    /// <param name="setup">What it tells, and to whom.</param>
    /// <exception cref="PipelineException">What surrounds the engine is broken.</exception>
    /// <exception cref="IOException">The address of the page is taken or not of this machine.</exception>
    public static async Task RunAsync(StreamRun run, WorkerSetup setup)
    {
        using var host = Build(run, setup);
        var service = host.Services.GetServices<IHostedService>().OfType<WorkerService>().Single();
        await host.StartAsync();
        if (host is WebApplication web) web.Services.GetRequiredService<ILogger<WorkerService>>().Listens(WebServer.AddressOf(web));
        await host.WaitForShutdownAsync();
        await service.ExecuteTask!;
    }

    private static IHost Build(StreamRun run, WorkerSetup setup)
    {
        // Configuration is read once: to watch its files is to watch every folder below the one that the program was started in.
        var once = new ConfigurationManager();
        once.AddInMemoryCollection([new("hostBuilder:reloadConfigOnChange", "false")]);
        var plain = Host.CreateApplicationBuilder(new HostApplicationBuilderSettings { Configuration = once });
        if (setup.Page is not { } page)
        {
            Add(plain, run, setup);
            return plain.Build();
        }
        var builder = WebServer.CreateBuilder(page);
        builder.Configuration.AddConfiguration(plain.Configuration);
        builder.Logging.AddConfiguration(plain.Configuration.GetSection("Logging"));
        builder.Logging.AddFilter("Microsoft.AspNetCore", LogLevel.Warning);
        Add(builder, run, setup);
        var web = builder.Build();
        WebServer.Map(web);
        return web;
    }

    private static void Add(IHostApplicationBuilder builder, StreamRun run, WorkerSetup setup)
    {
        builder.Logging.ClearProviders();
        WorkerLog.Write(builder.Logging);
        builder.Logging.AddFilter("Microsoft.Hosting.Lifetime", LogLevel.Warning);
        // A fault of the service is thrown below, and said once.
        builder.Logging.AddFilter("Microsoft.Extensions.Hosting.Internal.Host", LogLevel.None);
        builder.Services.Configure<HostOptions>(options => options.ShutdownTimeout = ShutdownTimeout);
        builder.Services.AddSingleton(TimeProvider.System);
        builder.Services.AddSingleton(run);
        builder.Services.AddSingleton<RunPhase>();
        // Services stop in the opposite order: the stream first, then what tells of it.
        TelemetrySetup.Add(builder.Services, setup);
        AddAlarms(builder.Services, setup);
        builder.Services.AddHostedService<WorkerService>();
    }

    private static void AddAlarms(IServiceCollection services, WorkerSetup setup)
    {
        services.AddSingleton(new SentMark(setup.Definition.State!.Folder));
        if (setup.Webhook is { } target)
        {
            services.AddSingleton(target);
            services.AddSingleton(new WebhookPacing());
            services.AddSingleton<WebhookSender>();
            services.AddSingleton<WebhookService>();
            services.AddHostedService(provider => provider.GetRequiredService<WebhookService>());
        }
        services.AddHostedService(provider =>
        {
            var run = provider.GetRequiredService<StreamRun>();
            return new AlarmService(
                setup.Definition.Engine.Stream, () => run.Health, run.IsResumed, provider.GetService<WebhookService>(), provider.GetRequiredService<SentMark>(),
                provider.GetRequiredService<TimeProvider>(), provider.GetRequiredService<ILogger<AlarmService>>());
        });
    }
}
