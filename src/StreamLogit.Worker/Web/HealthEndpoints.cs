using System.Buffers;
using System.Text.Json;
using Microsoft.AspNetCore.Builder;
using Microsoft.AspNetCore.Http;
using Microsoft.AspNetCore.Routing;
using StreamLogit.Worker.Web.Access;
using StreamLogit.Worker.Web.Views;

namespace StreamLogit.Worker.Web;

/// <summary>The page and its data.</summary>
internal static class HealthEndpoints
{
    public static void Map(IEndpointRouteBuilder routes, HealthFeed feed)
    {
        routes.MapGet("/", (HttpRequest request) => EmbeddedAssets.Get("index.html")!.ToResult(request));
        routes.MapGet("/assets/{name}", (string name, HttpRequest request) =>
            EmbeddedAssets.Get(name) is { } asset && !name.EndsWith(".html", StringComparison.Ordinal) ? asset.ToResult(request) : Results.NotFound());
        routes.MapGet("/data/view", (string? window, string? slice, string? past) => TypedResults.Bytes(feed.Frame.Json(new(window, slice, past)), "application/json"));
        routes.MapGet("/data/events", (string? window, string? slice, string? past, CancellationToken cancellation) =>
                TypedResults.ServerSentEvents(feed.FollowAsync(new(window, slice, past), cancellation)))
            .RequireRateLimiting(RequestLimits.Streams);
        routes.MapGet("/data/tables/{name}.csv", (string name, string? window, string? slice, string? past) =>
            Find(feed, name, new(window, slice, past)) is { } table
                ? Results.File(TableCsv.Of(table), "text/csv; charset=utf-8", $"{name}.csv")
                : Results.NotFound());
        routes.MapGet("/data/tables/{name}.json", (string name, string? window, string? slice, string? past) =>
            Find(feed, name, new(window, slice, past)) is { } table ? Results.Bytes(Json(table), "application/json") : Results.NotFound());
    }

    private static DataTable? Find(HealthFeed feed, string name, ViewQuery query) => feed.Frame.View(query).Tables.FirstOrDefault(table => table.Name == name);

    private static byte[] Json(DataTable table)
    {
        var buffer = new ArrayBufferWriter<byte>();
        using (var json = new Utf8JsonWriter(buffer)) table.Write(json);
        return buffer.WrittenSpan.ToArray();
    }
}
