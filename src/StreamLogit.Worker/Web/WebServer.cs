using System.Net;
using Microsoft.AspNetCore.Builder;
using Microsoft.AspNetCore.Hosting;
using Microsoft.AspNetCore.Hosting.Server;
using Microsoft.AspNetCore.Hosting.Server.Features;
using Microsoft.AspNetCore.Server.Kestrel.Core;
using Microsoft.Extensions.DependencyInjection;
using StreamLogit.Worker.Telemetry;
using StreamLogit.Worker.Web.Access;

namespace StreamLogit.Worker.Web;

/// <summary>The web server of a worker: what listens, what is checked before anything is answered, and what there is.</summary>
internal static class WebServer
{
    private const int MostConnections = 256;
    private const long LargestRequestBytes = 16 * 1024;

    /// <summary>A builder of a host that listens where the definition says and nowhere else, whatever the environment says.</summary>
    public static WebApplicationBuilder CreateBuilder(PageAccess access)
    {
        var builder = WebApplication.CreateEmptyBuilder(new WebApplicationOptions());
        builder.WebHost.UseKestrelCore().ConfigureKestrel(kestrel => Configure(kestrel, access));
        if (access.Certificate is not null) builder.WebHost.UseKestrelHttpsConfiguration();
        var services = builder.Services;
        services.AddRoutingCore();
        services.AddRateLimiter(RequestLimits.Configure);
        services.AddSingleton(access);
        services.AddSingleton<SecurityHeaders>();
        services.AddSingleton<HostCheck>();
        services.AddSingleton<KeyCheck>();
        services.AddSingleton<HealthFeed>();
        services.AddHostedService(provider => provider.GetRequiredService<HealthFeed>());
        return builder;
    }

    /// <summary>Puts the checks and the pages in their order.</summary>
    public static void Map(WebApplication app)
    {
        app.UseMiddleware<SecurityHeaders>();
        app.UseMiddleware<HostCheck>();
        app.UseRouting();
        app.UseRateLimiter();
        app.UseMiddleware<KeyCheck>();
        LoginEndpoints.Map(app, app.Services.GetRequiredService<PageAccess>().Key, app.Services.GetRequiredService<TimeProvider>());
        HealthEndpoints.Map(app, app.Services.GetRequiredService<HealthFeed>());
        ProbeEndpoints.Map(app);
    }

    /// <summary>Where it listens, once it does.</summary>
    public static string AddressOf(WebApplication app) =>
        app.Services.GetRequiredService<IServer>().Features.Get<IServerAddressesFeature>()!.Addresses.First();

    private static void Configure(KestrelServerOptions kestrel, PageAccess access)
    {
        var (address, port) = (access.Listen.Address, access.Listen.Port);
        kestrel.AddServerHeader = false;
        kestrel.Limits.MaxConcurrentConnections = MostConnections;
        kestrel.Limits.MaxRequestBodySize = LargestRequestBytes;
        if (address.Equals(IPAddress.IPv6Any)) kestrel.ListenAnyIP(port, Secure);
        else kestrel.Listen(address, port, Secure);

        void Secure(ListenOptions listen)
        {
            if (access.Certificate is { } certificate) listen.UseHttps(certificate);
        }
    }
}
