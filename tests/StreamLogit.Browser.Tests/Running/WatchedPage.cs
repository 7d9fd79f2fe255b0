using System.Collections.Concurrent;
using System.Diagnostics;
using System.Text.Json;
using Microsoft.Playwright;

namespace StreamLogit.Browser.Tests.Running;

/// <summary>A page of the browser with what it asked for and what its console said.</summary>
public sealed class WatchedPage : IAsyncDisposable
{
    private static readonly TimeSpan Patience = TimeSpan.FromSeconds(60);
    private readonly ConcurrentQueue<string> _complaints = new();
    private readonly ConcurrentQueue<string> _requests = new();
    private readonly IBrowserContext _context;

    public WatchedPage(IBrowserContext context, IPage page)
    {
        _context = context;
        Page = page;
        page.Console += (_, message) => _complaints.Enqueue($"{message.Type}: {message.Text}");
        page.PageError += (_, error) => _complaints.Enqueue(error);
        page.Request += (_, request) => _requests.Enqueue(request.Url);
    }

    public IPage Page { get; }

    public IBrowserContext Context => _context;

    /// <summary>Whatever the console said, of any level, and errors that nobody caught.</summary>
    public IReadOnlyCollection<string> Complaints => _complaints;

    /// <summary>The addresses that were asked for.</summary>
    public IReadOnlyCollection<string> Requests => _requests;

    /// <summary>Waits until an expression holds in the page.</summary>
    public async Task WaitForAsync(string expression, string what)
    {
        // Not WaitForFunctionAsync: it evaluates text in the page, which the content security policy forbids.
        for (long start = Stopwatch.GetTimestamp(); Stopwatch.GetElapsedTime(start) < Patience; await Task.Delay(50))
        {
            try
            {
                if (await Page.EvaluateAsync<bool>($"() => Boolean({expression})")) return;
            }
            catch (PlaywrightException exception) when (exception.Message.Contains("context was destroyed", StringComparison.Ordinal))
            {
                // Another page is on its way.
            }
        }
        throw new TimeoutException($"The page did not come to it within {Patience.TotalSeconds:0} s: {what}. The console said: {string.Join('\n', _complaints)}");
    }

    /// <summary>What axe-core finds wrong with the page as it stands, by the rules of WCAG 2.2 AA and its best practices; empty where nothing is.</summary>
    public async Task<IReadOnlyList<string>> FindAxeViolationsAsync()
    {
        await Page.EvaluateAsync(AxeSource());
        var violations = await Page.EvaluateAsync<JsonElement>("async () => (await axe.run(document, { resultTypes: ['violations'] })).violations");
        return [.. violations.EnumerateArray().SelectMany(Describe)];
    }

    public async ValueTask DisposeAsync() => await _context.DisposeAsync();

    private static IEnumerable<string> Describe(JsonElement violation) => violation.GetProperty("nodes").EnumerateArray()
        .Select(node => $"{violation.GetProperty("id").GetString()}: {violation.GetProperty("help").GetString()}: {node.GetProperty("html").GetString()} {node.GetProperty("failureSummary").GetString()}");

    private static string AxeSource()
    {
        using var reader = new StreamReader(typeof(WatchedPage).Assembly.GetManifestResourceStream("axe.min.js")!);
        return reader.ReadToEnd();
    }
}
