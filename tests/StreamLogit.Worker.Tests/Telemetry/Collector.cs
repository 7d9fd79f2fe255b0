using System.Collections.Concurrent;
using System.IO.Compression;
using System.Net;
using System.Text;
using Microsoft.AspNetCore.Builder;
using Microsoft.AspNetCore.Hosting;
using Microsoft.AspNetCore.Hosting.Server;
using Microsoft.AspNetCore.Hosting.Server.Features;
using Microsoft.AspNetCore.Http;
using Microsoft.Extensions.DependencyInjection;
using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Worker.Tests.Telemetry;

/// <summary>Takes OTLP over HTTP on this machine, and keeps what came.</summary>
internal sealed class Collector : IDisposable
{
    private readonly WebApplication _server;

    public Collector()
    {
        var builder = WebApplication.CreateEmptyBuilder(new WebApplicationOptions());
        builder.WebHost.UseKestrelCore().ConfigureKestrel(kestrel => kestrel.Listen(IPAddress.Loopback, 0));
        _server = builder.Build();
        _server.Run(TakeAsync);
        if (!_server.StartAsync().Wait(StreamLogitProcess.Patience)) throw new TimeoutException("The collector did not start.");
        Url = _server.Services.GetRequiredService<IServer>().Features.Get<IServerAddressesFeature>()!.Addresses.First();
    }

    public string Url { get; }

    /// <summary>Path and body of each request; of the body, the text that it holds can be searched.</summary>
    public ConcurrentQueue<(string Path, string Text)> Requests { get; } = [];

    public void Dispose()
    {
        if (!_server.StopAsync().Wait(StreamLogitProcess.Patience)) throw new TimeoutException("The collector did not stop.");
        _server.DisposeAsync().AsTask().Wait(StreamLogitProcess.Patience);
    }

    private async Task TakeAsync(HttpContext context)
    {
        using var body = new MemoryStream();
        var stream = context.Request.Headers.ContentEncoding == "gzip" ? new GZipStream(context.Request.Body, CompressionMode.Decompress) : context.Request.Body;
        await stream.CopyToAsync(body, context.RequestAborted);
        Requests.Enqueue((context.Request.Path, Encoding.Latin1.GetString(body.ToArray())));
        context.Response.ContentType = "application/x-protobuf";
    }
}
