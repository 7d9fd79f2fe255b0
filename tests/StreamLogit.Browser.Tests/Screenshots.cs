using StreamLogit.Browser.Tests.Running;
using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Browser.Tests;

/// <summary>
/// Takes the pictures of docs/health-page.md and docs/replay.md anew. Run it by name: <c>dotnet test --project tests/StreamLogit.Browser.Tests -- --explicit only</c>.
/// </summary>
public sealed class Screenshots(ChromiumFixture chromium, ReplayReportTests.Report report) : IClassFixture<ReplayReportTests.Report>
{
    private const int Width = 1200;

    // The first 200,000 of the 400,000 records are from before the new pattern.
    private static readonly (string Name, int Records, string Query)[] Moments =
    [
        ("health-page-before.png", 195_000, "?window=7d&past=60d"),
        ("health-page-at.png", 262_000, "?window=7d&past=60d"),
        ("health-page-after.png", 345_000, "?window=7d&past=60d"),
    ];

    [Fact(Explicit = true)]
    public async Task Take_OfADemoStreamBeforeAtAndAfterTheNewPattern()
    {
        string[] records = StreamLogitProcess.Run("synth", "ferry-tickets", "--records", "400000", "--events-per-day", "2000").Output.Split('\n', StringSplitOptions.RemoveEmptyEntries);
        using var stream = new ServedStream(File.ReadAllText(DemoStreams.File("ferry-tickets.json")), records, Moments[0].Records);
        foreach (var (name, count, query) in Moments)
        {
            stream.Give(count);
            await using var watched = await chromium.OpenAsync(Width);
            await watched.Page.GotoAsync(stream.Address + query);
            string last = records[count - 1].Split("\"time\":\"")[1][..16];
            await watched.WaitForAsync($"document.getElementById('clock').dateTime.startsWith('{last}')", $"the first {count} records");
            await watched.Page.ScreenshotAsync(new() { Path = RepositoryFiles.At("docs", name), Clip = new() { X = 0, Y = 0, Width = Width, Height = 1640 }, FullPage = true });
            if (name == Moments[1].Name)
                await watched.Page.ScreenshotAsync(new() { Path = RepositoryFiles.At("docs", "health-page-whole.png"), FullPage = true });
        }

        await using var narrow = await chromium.OpenAsync(390, scheme: Microsoft.Playwright.ColorScheme.Dark);
        await narrow.Page.GotoAsync(stream.Address + Moments[0].Query);
        await narrow.WaitForAsync("!document.getElementById('main').hasAttribute('aria-busy')", "the figures");
        await narrow.Page.ScreenshotAsync(new() { Path = RepositoryFiles.At("docs", "health-page-narrow.png"), Clip = new() { X = 0, Y = 0, Width = 390, Height = 1640 }, FullPage = true });
    }

    [Fact(Explicit = true)]
    public async Task Take_OfAReplayReport()
    {
        await using var watched = await chromium.OpenAsync(Width);
        await watched.Page.GotoAsync(report.Address);
        await watched.Page.ScreenshotAsync(new() { Path = RepositoryFiles.At("docs", "replay-report.png"), Clip = new() { X = 0, Y = 0, Width = Width, Height = 1100 }, FullPage = true });
    }
}
