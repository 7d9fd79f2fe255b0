using Microsoft.AspNetCore.Http;
using Microsoft.Extensions.Primitives;

namespace StreamLogit.Worker.Web.Access;

/// <summary>What every answer tells a browser: load nothing from elsewhere, run nothing but the page's own files, tell nobody, be framed by nobody.</summary>
internal sealed class SecurityHeaders : IMiddleware
{
    public const string Policy =
        "default-src 'none'; script-src 'self'; style-src 'self'; img-src 'self'; connect-src 'self'; base-uri 'none'; form-action 'self'; "
        + "frame-ancestors 'none'; require-trusted-types-for 'script'; trusted-types 'none'";

    private static readonly KeyValuePair<string, StringValues>[] Headers =
    [
        new("Content-Security-Policy", Policy),
        new("X-Content-Type-Options", "nosniff"),
        new("X-Frame-Options", "DENY"),
        new("Referrer-Policy", "no-referrer"),
        new("Cross-Origin-Opener-Policy", "same-origin"),
        new("Cross-Origin-Resource-Policy", "same-origin"),
        new("Permissions-Policy", "camera=(), geolocation=(), microphone=(), payment=(), usb=()"),
        new("Cache-Control", "no-store"),
    ];

    /// <inheritdoc/>
    public Task InvokeAsync(HttpContext context, RequestDelegate next)
    {
        foreach (var (name, value) in Headers) context.Response.Headers[name] = value;
        if (context.Request.IsHttps) context.Response.Headers.StrictTransportSecurity = "max-age=31536000";
        return next(context);
    }
}
