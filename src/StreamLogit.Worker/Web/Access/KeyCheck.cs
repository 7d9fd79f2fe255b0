using System.Globalization;
using Microsoft.AspNetCore.Http;
using StreamLogit.Worker.Telemetry;

namespace StreamLogit.Worker.Web.Access;

/// <summary>Lets only those pass who give the access key in a header, or have a session; the form that asks for the key and what it looks like are open.</summary>
internal sealed class KeyCheck(PageAccess access, TimeProvider time) : IMiddleware
{
    private const string Scheme = "Bearer ";

    /// <summary>The name of the session's cookie. Browsers share cookies among all ports of a host, and each worker has sessions of its own.</summary>
    public static string CookieName(HttpContext context) => string.Create(CultureInfo.InvariantCulture, $"streamlogit-{context.Connection.LocalPort}");

    /// <inheritdoc/>
    public Task InvokeAsync(HttpContext context, RequestDelegate next)
    {
        if (access.Key is not { } key || IsOpen(context.Request.Path) || IsAllowed(key, context.Request)) return next(context);
        if (context.Request.Path == "/")
        {
            context.Response.Redirect("/login" + context.Request.QueryString);
            return Task.CompletedTask;
        }
        context.Response.StatusCode = StatusCodes.Status401Unauthorized;
        context.Response.Headers.WWWAuthenticate = "Bearer";
        return context.Response.WriteAsync("The access key is missing: send it as \"Authorization: Bearer KEY\", or log in at /login.\n");
    }

    private static bool IsOpen(PathString path) => path == "/login" || path == "/assets/page.css" || path == "/assets/icon.svg" || ProbeEndpoints.IsProbe(path);

    private bool IsAllowed(AccessKey known, HttpRequest request)
    {
        string? header = request.Headers.Authorization;
        if (header?.StartsWith(Scheme, StringComparison.OrdinalIgnoreCase) == true && known.Matches(header[Scheme.Length..].Trim())) return true;
        return known.IsSession(request.Cookies[CookieName(request.HttpContext)], time.GetUtcNow());
    }
}
