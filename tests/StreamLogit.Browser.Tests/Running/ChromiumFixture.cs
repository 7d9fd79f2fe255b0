using Microsoft.Playwright;

[assembly: AssemblyFixture(typeof(StreamLogit.Browser.Tests.Running.ChromiumFixture))]

namespace StreamLogit.Browser.Tests.Running;

/// <summary>The browser that all tests share; each opens a context of its own in it.</summary>
public sealed class ChromiumFixture : IAsyncLifetime
{
    /// <summary>Where this is set, a missing browser is a failure and not a skipped test.</summary>
    public const string RequiredVariable = "STREAMLOGIT_BROWSER_REQUIRED";

    private const string Chromium = "/usr/bin/chromium";

    private IPlaywright? _playwright;
    private IBrowser? _browser;

    public async ValueTask InitializeAsync()
    {
        if (!File.Exists(Chromium)) return;
        _playwright = await Playwright.CreateAsync();
        _browser = await _playwright.Chromium.LaunchAsync(new BrowserTypeLaunchOptions
        {
            ExecutablePath = Chromium,
            Headless = true,
            Args =
            [
                "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run", "--disable-background-networking", "--disable-component-update", "--disable-sync",
            ],
        });
    }

    /// <summary>Opens an empty page and writes down what it asks for and complains about. Skips the test where there is no browser.</summary>
    public async Task<WatchedPage> OpenAsync(
        int width = 1280, int height = 900, ColorScheme scheme = ColorScheme.Light, bool reducedMotion = false, bool bypassPolicy = false)
    {
        if (Environment.GetEnvironmentVariable(RequiredVariable) is null or "") Assert.SkipUnless(_browser is not null, $"There is no {Chromium}.");
        if (_browser is null) throw new InvalidOperationException($"There is no {Chromium}, and {RequiredVariable} is set.");
        var context = await _browser.NewContextAsync(new BrowserNewContextOptions
        {
            ViewportSize = new ViewportSize { Width = width, Height = height },
            ColorScheme = scheme,
            ReducedMotion = reducedMotion ? ReducedMotion.Reduce : ReducedMotion.NoPreference,
            BypassCSP = bypassPolicy,
            Locale = "en-GB",
        });
        return new WatchedPage(context, await context.NewPageAsync());
    }

    public async ValueTask DisposeAsync()
    {
        if (_browser is not null) await _browser.DisposeAsync();
        _playwright?.Dispose();
    }
}
