using Microsoft.Playwright;
using StreamLogit.Browser.Tests.Running;
using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Browser.Tests;

/// <summary>What the page says before, at and after the new pattern of the demo stream is what docs/health-page.md says that it does.</summary>
public sealed class NewPatternTests(ChromiumFixture chromium)
{
    private const int Width = 1200, Height = 1640;

    // The first 200,000 of the 400,000 records are from before the new pattern.
    private static readonly (string Picture, int Records, string Verdict, string? Finding)[] Moments =
    [
        ("health-page-before.png", 195_000, "Probabilities hold", null),
        ("health-page-at.png", 262_000, "Probabilities promise too little", "Where gift=true: "),
        ("health-page-after.png", 345_000, "Probabilities hold", null),
    ];

    [Fact]
    public async Task Page_BeforeAtAndAfter_SaysWhatTheDocumentationSays()
    {
        await using var watched = await chromium.OpenAsync(Width);
        string documentation = RepositoryFiles.Read("docs/health-page.md");
        string[] records = StreamLogitProcess.Run("synth", "ferry-tickets", "--records", "400000", "--events-per-day", "2000").Output.Split('\n', StringSplitOptions.RemoveEmptyEntries);
        using var stream = new ServedStream(File.ReadAllText(DemoStreams.File("ferry-tickets.json")), records, Moments[0].Records);
        foreach (var (picture, count, verdict, finding) in Moments)
        {
            stream.Give(count);
            await watched.Page.GotoAsync(stream.Address + "/?window=7d&past=60d");
            string last = records[count - 1].Split("\"time\":\"")[1][..16];
            await watched.WaitForAsync($"document.getElementById('clock').dateTime.startsWith('{last}')", $"the first {count} records");

            Assert.Equal(verdict, await watched.Page.InnerTextAsync("#verdict-title"));
            string numbers = (await watched.Page.InnerTextAsync("#verdict-sentence")).Replace(" in the last 7 days", "", StringComparison.Ordinal);
            Assert.Contains($"| **{verdict}**{numbers[..numbers.IndexOf(" (", StringComparison.Ordinal)]} (", documentation, StringComparison.Ordinal);
            string findings = await watched.Page.InnerTextAsync("#findings");
            if (finding is not null) Assert.Contains(finding, findings, StringComparison.Ordinal);
            await Pictures.TakeAsync(watched.Page, picture, Width, Height);
            if (finding is not null) await Pictures.TakeAsync(watched.Page, "health-page-whole.png", Width);
        }
        Assert.Empty(watched.Complaints);

        await using var narrow = await chromium.OpenAsync(390, scheme: ColorScheme.Dark);
        await narrow.Page.GotoAsync(stream.Address + "/?window=7d&past=60d");
        await narrow.WaitForAsync("!document.getElementById('main').hasAttribute('aria-busy')", "the figures");
        await Pictures.TakeAsync(narrow.Page, "health-page-narrow.png", 390, Height);
    }
}
