using System.Net;
using Microsoft.AspNetCore.Http;
using StreamLogit.Worker.Telemetry;

namespace StreamLogit.Worker.Web.Access;

/// <summary>
/// Lets only requests pass that ask for this worker by a name it knows: so no page elsewhere can reach it by a name that its owner points here.
/// </summary>
internal sealed class HostCheck(PageAccess access) : IMiddleware
{
    /// <inheritdoc/>
    public Task InvokeAsync(HttpContext context, RequestDelegate next)
    {
        if (ProbeEndpoints.IsProbe(context.Request.Path) || IsKnown(context.Request.Host.Host, context.Connection.LocalIpAddress)) return next(context);
        context.Response.StatusCode = StatusCodes.Status421MisdirectedRequest;
        return context.Response.WriteAsync("This worker does not know the host name of the request. Names besides its address stand in listen.hosts of the definition.\n");
    }

    private bool IsKnown(string host, IPAddress? local)
    {
        // An address proves that no foreign name was involved; it must be the one that the request came to.
        if (IPAddress.TryParse(host.Trim('[', ']'), out var address))
            return local is not null && Plain(address).Equals(Plain(local)) || access.Listen.Hosts.Contains(host, StringComparer.OrdinalIgnoreCase);
        return host.Equals("localhost", StringComparison.OrdinalIgnoreCase) || access.Listen.Hosts.Contains(host, StringComparer.OrdinalIgnoreCase);
    }

    private static IPAddress Plain(IPAddress address) => address.IsIPv4MappedToIPv6 ? address.MapToIPv4() : address;
}
