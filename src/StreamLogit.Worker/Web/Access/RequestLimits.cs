using System.Globalization;
using System.Threading.RateLimiting;
using Microsoft.AspNetCore.Http;
using Microsoft.AspNetCore.RateLimiting;

namespace StreamLogit.Worker.Web.Access;

/// <summary>How much one address may ask for, and how many streams of events are open at once, so that no viewer takes time from the engine.</summary>
internal static class RequestLimits
{
    /// <summary>The policy of event streams.</summary>
    public const string Streams = "streams";

    /// <summary>The policy of attempts to log in.</summary>
    public const string Logins = "logins";

    /// <summary>Event streams open at once.</summary>
    public const int MostStreams = 64;

    /// <summary>Requests that an address may make at once; they come back at <see cref="RequestsPerSecond"/>.</summary>
    public const int RequestBurst = 200;

    /// <summary>Requests of an address each second, when it made many.</summary>
    public const int RequestsPerSecond = 20;

    /// <summary>Attempts of an address to log in each minute.</summary>
    public const int LoginsPerMinute = 10;

    public static void Configure(RateLimiterOptions options)
    {
        options.RejectionStatusCode = StatusCodes.Status429TooManyRequests;
        options.GlobalLimiter = PartitionedRateLimiter.Create<HttpContext, string>(context => RateLimitPartition.GetTokenBucketLimiter(Address(context), _ => new()
        {
            TokenLimit = RequestBurst,
            TokensPerPeriod = RequestsPerSecond,
            ReplenishmentPeriod = TimeSpan.FromSeconds(1),
            AutoReplenishment = true,
        }));
        options.AddPolicy(Streams, _ => RateLimitPartition.GetConcurrencyLimiter("all", _ => new() { PermitLimit = MostStreams }));
        options.AddPolicy(Logins, context => RateLimitPartition.GetFixedWindowLimiter(
            Address(context), _ => new() { PermitLimit = LoginsPerMinute, Window = TimeSpan.FromMinutes(1) }));
        options.OnRejected = static (rejected, cancellation) =>
        {
            var response = rejected.HttpContext.Response;
            int seconds = rejected.Lease.TryGetMetadata(MetadataName.RetryAfter, out var after) ? Math.Max(1, (int)Math.Ceiling(after.TotalSeconds)) : 5;
            response.Headers.RetryAfter = seconds.ToString(CultureInfo.InvariantCulture);
            return new ValueTask(response.WriteAsync("Too many requests, or too many open streams. Try again later.\n", cancellation));
        };
    }

    private static string Address(HttpContext context) => context.Connection.RemoteIpAddress?.ToString() ?? "";
}
