using Microsoft.AspNetCore.Builder;
using Microsoft.AspNetCore.Http;
using Microsoft.AspNetCore.Routing;

namespace StreamLogit.Worker.Web.Access;

/// <summary>The form that asks for the access key, and the session that it gives.</summary>
internal static class LoginEndpoints
{
    private static readonly string[] Names = ["window", "slice", "past"];

    public static void Map(IEndpointRouteBuilder routes, AccessKey? key, TimeProvider time)
    {
        routes.MapGet("/login", (HttpRequest request) => key is null
            ? Results.Redirect("/")
            : EmbeddedAssets.Get(request.Query.ContainsKey("again") ? "login-again.html" : "login.html")!.ToResult(request));
        routes.MapPost("/login", async (HttpContext context) =>
        {
            var form = context.Request.HasFormContentType ? await context.Request.ReadFormAsync(context.RequestAborted) : null;
            if (key is null || !key.Matches(form?["key"])) return Redirect(context, "/login", [.. Chosen(context.Request), new("again", "")]);
            context.Response.Cookies.Append(KeyCheck.CookieName(context), key.CreateSession(time.GetUtcNow()), Options(AccessKey.SessionLength));
            return Redirect(context, "/", Chosen(context.Request));
        }).RequireRateLimiting(RequestLimits.Logins).DisableAntiforgery();
        routes.MapGet("/data/session", () => Results.Text(key is null ? "{\"key\":false}" : "{\"key\":true}", "application/json"));
        routes.MapPost("/logout", (HttpContext context) =>
        {
            context.Response.Cookies.Delete(KeyCheck.CookieName(context), Options(null));
            return Redirect(context, "/login", []);
        });
    }

    /// <summary>What of the page a link asked for, so that it is shown after the key was given.</summary>
    private static IEnumerable<KeyValuePair<string, string?>> Chosen(HttpRequest request) =>
        from name in Names where request.Query.ContainsKey(name) select new KeyValuePair<string, string?>(name, request.Query[name]);

    // After a form a browser is to fetch the next page with GET.
    private static IResult Redirect(HttpContext context, string path, IEnumerable<KeyValuePair<string, string?>> query)
    {
        context.Response.Headers.Location = path + QueryString.Create(query);
        return Results.StatusCode(StatusCodes.Status303SeeOther);
    }

    private static CookieOptions Options(TimeSpan? age) => new() { Secure = true, HttpOnly = true, SameSite = SameSiteMode.Strict, Path = "/", MaxAge = age, IsEssential = true };
}
