using System.Globalization;
using Microsoft.Playwright;
using StreamLogit.Browser.Tests.Running;
using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Browser.Tests;

/// <summary>The health page in a real browser.</summary>
public sealed class HealthPageTests(ChromiumFixture chromium, ServedFerryTickets worker) : IClassFixture<ServedFerryTickets>
{
    private const string IsShown = "!document.getElementById('main').hasAttribute('aria-busy')";

    [Theory]
    [InlineData(1280, ColorScheme.Light)]
    [InlineData(1280, ColorScheme.Dark)]
    [InlineData(390, ColorScheme.Light)]
    [InlineData(390, ColorScheme.Dark)]
    public async Task Page_WithAllTablesOpen_HasNoAxeViolation(int width, ColorScheme scheme)
    {
        await using var watched = await OpenAsync(await chromium.OpenAsync(width, scheme: scheme));
        await watched.Page.EvaluateAsync("() => document.querySelectorAll('.more > button[aria-expanded=false]').forEach(button => button.click())");

        Assert.Empty(await watched.FindAxeViolationsAsync());
    }

    [Fact]
    public async Task Page_Shown_AsksOnlyItsOwnOriginAndLeavesTheConsoleEmpty()
    {
        await using var watched = await OpenAsync(await chromium.OpenAsync());

        Assert.All(watched.Requests, request => Assert.StartsWith(worker.Address + "/", request, StringComparison.Ordinal));
        Assert.Contains(watched.Requests, request => request.Contains("/data/events", StringComparison.Ordinal));
        Assert.Empty(watched.Complaints);
    }

    [Fact]
    public async Task Page_WhenRecordsCome_ShowsThemWithoutBeingAsked()
    {
        using var stream = ServedStream.OfFerryTickets(records: 12_000);
        await using var watched = await OpenAsync(await chromium.OpenAsync(), stream.Address);
        await watched.WaitForAsync("document.getElementById('progress').textContent.startsWith('12,000 records taken, 0 of them rejected; ')", "the first 12,000 records");
        string before = await ClockAsync(watched);

        stream.Give(14_000);
        await watched.WaitForAsync("document.getElementById('progress').textContent.startsWith('14,000 records taken')", "2,000 records more");

        Assert.True(string.CompareOrdinal(await ClockAsync(watched), before) > 0);
        Assert.Empty(watched.Complaints);
    }

    [Fact]
    public async Task Pause_Pressed_KeepsWhatIsShownUntilResumed()
    {
        using var stream = ServedStream.OfFerryTickets(records: 8_000);
        await using var watched = await OpenAsync(await chromium.OpenAsync(), stream.Address);
        await watched.WaitForAsync("document.getElementById('link').dataset.state === 'live'", "the connection");
        await watched.Page.ClickAsync("#pause");
        await watched.WaitForAsync("document.getElementById('pause').getAttribute('aria-pressed') === 'true'", "the button to be pressed");
        string before = await ClockAsync(watched);

        stream.Give(12_000);
        using var client = new HttpClient();
        bool hasMoved = false;
        for (int attempt = 0; attempt < 600 && !hasMoved; attempt++)
        {
            await Task.Delay(100, TestContext.Current.CancellationToken);
            hasMoved = !(await client.GetStringAsync($"{stream.Address}/data/view", TestContext.Current.CancellationToken)).Contains($"\"clock\":\"{before}\"", StringComparison.Ordinal);
        }

        Assert.True(hasMoved, "The worker did not take the records that came while the page was paused.");
        Assert.Equal(before, await ClockAsync(watched));
        Assert.Equal("Paused", await watched.Page.InnerTextAsync("#link-text"));
        await watched.Page.ClickAsync("#pause");
        await watched.WaitForAsync($"document.getElementById('clock').dateTime !== '{before}'", "what came meanwhile");
    }

    [Fact]
    public async Task Link_WithWindowSliceAndPast_ShowsThemAgain()
    {
        await using var watched = await OpenAsync(await chromium.OpenAsync(), worker.Address + "/?window=30d&slice=channel%3Dweb&past=60d");

        Assert.Equal("30d", await watched.Page.EvaluateAsync<string>("() => document.querySelector('#window input:checked').value"));
        Assert.Equal("channel=web", await watched.Page.EvaluateAsync<string>("() => document.getElementById('slice').value"));
        Assert.Equal("60d", await watched.Page.EvaluateAsync<string>("() => document.querySelector('#past input:checked').value"));
        await watched.Page.SelectOptionAsync("#slice", "channel=app");
        await watched.WaitForAsync("new URLSearchParams(location.search).get('slice') === 'channel=app'", "the slice in the address");
        await watched.Page.GoBackAsync();
        await watched.WaitForAsync("document.getElementById('slice').value === 'channel=web'", "the slice from before");
    }

    [Fact]
    public async Task Keyboard_Alone_ReachesEverything()
    {
        await using var watched = await OpenAsync(await chromium.OpenAsync(), worker.Address + "/?window=7d");
        var keyboard = watched.Page.Keyboard;

        await keyboard.PressAsync("Tab");
        Assert.Equal("Skip to the figures", await FocusedTextAsync(watched));
        await keyboard.PressAsync("Tab");
        Assert.Equal("Pause", await FocusedTextAsync(watched));
        await keyboard.PressAsync("Tab");
        await keyboard.PressAsync("ArrowRight");
        await watched.WaitForAsync("new URLSearchParams(location.search).get('window') === '30d'", "the next window in the address");

        await watched.Page.FocusAsync(".chart");
        string last = await watched.Page.InnerTextAsync(".readout");
        await keyboard.PressAsync("Home");
        string first = await watched.Page.InnerTextAsync(".readout");
        await keyboard.PressAsync("ArrowRight");
        Assert.Equal(3, new[] { last, first, await watched.Page.InnerTextAsync(".readout") }.Distinct().Count());
        await keyboard.PressAsync("Tab");
        await keyboard.PressAsync("Enter");
        Assert.True(await watched.Page.Locator("#table-promised tbody tr").CountAsync() > 3);
    }

    [Theory]
    [InlineData(320)]
    [InlineData(390)]
    [InlineData(768)]
    public async Task Page_OnANarrowScreen_NeedsNoSidewaysScrolling(int width)
    {
        await using var watched = await OpenAsync(await chromium.OpenAsync(width));

        Assert.Equal(width, await watched.Page.EvaluateAsync<int>("() => document.documentElement.scrollWidth"));
    }

    [Fact]
    public async Task Page_InDarkMode_IsDark()
    {
        await using var light = await OpenAsync(await chromium.OpenAsync());
        await using var dark = await OpenAsync(await chromium.OpenAsync(scheme: ColorScheme.Dark));

        Assert.True(await BrightnessAsync(light) > 200);
        Assert.True(await BrightnessAsync(dark) < 60);
    }

    [Fact]
    public async Task Page_WithReducedMotion_MovesNothing()
    {
        const string moving = """
            () => [...document.querySelectorAll('*')].filter(element => {
              const style = getComputedStyle(element);
              return style.animationName !== 'none' || style.transitionDuration.split(',').some(duration => parseFloat(duration) > 0);
            }).length
            """;
        await using var still = await OpenAsync(await chromium.OpenAsync(reducedMotion: true));
        await using var usual = await OpenAsync(await chromium.OpenAsync());

        Assert.Equal(0, await still.Page.EvaluateAsync<int>(moving));
        Assert.NotEqual(0, await usual.Page.EvaluateAsync<int>(moving));
    }

    [Fact]
    public async Task Page_OfAStreamWithoutRecords_SaysThatThereIsNothingToTell()
    {
        using var stream = ServedStream.OfFerryTickets(records: 0);
        await using var watched = await OpenAsync(await chromium.OpenAsync(), stream.Address);

        Assert.Equal("Nothing to tell yet", await watched.Page.InnerTextAsync("#verdict-title"));
        Assert.Empty(await watched.FindAxeViolationsAsync());
        Assert.Empty(watched.Complaints);
    }

    [Fact]
    public async Task Text_OfTheStream_StaysText()
    {
        const string hostile = "<img src=x onerror=alert(1)>";
        string definition = $$"""
            {
              "stream": "{{hostile}}",
              "features": [ { "category": "c<b>" } ],
              "health": { "windows": ["1d"], "slices": ["c<b>"] }
            }
            """;
        string[] records =
        [
            .. Enumerable.Range(0, 600).Select(i =>
                $$"""{"id":"{{i}}","time":"2026-03-01T{{i / 60:00}}:{{i % 60:00}}:00Z","c<b>":"{{hostile}}{{i % 2}}","label":{{i % 5 / 4}}}"""),
            hostile,
        ];
        using var stream = new ServedStream(definition, records, records.Length);
        await using var watched = await OpenAsync(await chromium.OpenAsync(), stream.Address);
        await watched.WaitForAsync("document.querySelector('#table-reject-examples tbody td')", "the example of a reject");

        Assert.Equal(hostile, await watched.Page.InnerTextAsync("#stream"));
        Assert.Contains(hostile, await watched.Page.InnerTextAsync("#table-reject-examples"), StringComparison.Ordinal);
        Assert.Contains(hostile, await watched.Page.InnerTextAsync("#table-slices"), StringComparison.Ordinal);
        Assert.Contains(hostile, await watched.Page.InnerTextAsync("#table-coefficients"), StringComparison.Ordinal);
        Assert.Equal(0, await watched.Page.Locator("img").CountAsync());
        Assert.Empty(watched.Complaints);
    }

    [Fact]
    public async Task EveryPanel_HasATableAndFiles()
    {
        await using var watched = await OpenAsync(await chromium.OpenAsync());
        var files = await watched.Page.EvaluateAsync<string[]>("() => [...document.querySelectorAll('.panel .files a')].map(link => link.href)");
        int panels = await watched.Page.Locator(".panel").CountAsync();

        Assert.Equal(2 * panels, files.Length);
        using var client = new HttpClient();
        foreach (string file in files)
        {
            using var answer = await client.GetAsync(new Uri(file), TestContext.Current.CancellationToken);
            Assert.True(answer.IsSuccessStatusCode, file);
        }
    }

    private static Task<string> ClockAsync(WatchedPage watched) => watched.Page.EvaluateAsync<string>("() => document.getElementById('clock').dateTime");

    private static Task<string> FocusedTextAsync(WatchedPage watched) => watched.Page.EvaluateAsync<string>("() => document.activeElement.textContent.trim()");

    private static async Task<double> BrightnessAsync(WatchedPage watched)
    {
        string colour = await watched.Page.EvaluateAsync<string>("() => getComputedStyle(document.body).backgroundColor");
        return colour.Trim("rgba()".ToCharArray()).Split(',').Take(3).Average(part => double.Parse(part, CultureInfo.InvariantCulture));
    }

    private async Task<WatchedPage> OpenAsync(WatchedPage watched, string? address = null)
    {
        await watched.Page.GotoAsync(address ?? worker.Address);
        await watched.WaitForAsync(IsShown, "the figures");
        return watched;
    }
}
