using Microsoft.Playwright;
using StreamLogit.Browser.Tests.Running;
using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Browser.Tests;

/// <summary>The report of a replay, opened from disk.</summary>
public sealed class ReplayReportTests(ChromiumFixture chromium, ReplayReportTests.Report report) : IClassFixture<ReplayReportTests.Report>
{
    [Theory]
    [InlineData(1280, ColorScheme.Light)]
    [InlineData(1280, ColorScheme.Dark)]
    [InlineData(390, ColorScheme.Light)]
    [InlineData(390, ColorScheme.Dark)]
    public async Task Report_OpenedFromDisk_LoadsNothingAndHasNoFault(int width, ColorScheme scheme)
    {
        await using var watched = await chromium.OpenAsync(width, scheme: scheme);
        await watched.Page.GotoAsync(report.Address);
        await watched.Page.EvaluateAsync("() => document.querySelectorAll('details').forEach(details => { details.open = true; })");

        Assert.Contains("What was tried", await watched.Page.InnerTextAsync("main"), StringComparison.Ordinal);
        Assert.Equal(width, await watched.Page.EvaluateAsync<int>("() => document.documentElement.scrollWidth"));
        Assert.Empty(await watched.FindAxeViolationsAsync());
        Assert.Equal([report.Address], watched.Requests);
        Assert.Empty(watched.Complaints);
    }

    /// <summary>A report whose stream has a name that would break out of markup that does not escape it.</summary>
    public sealed class Report : IDisposable
    {
        private readonly TemporaryFolder _folder = new();

        public Report()
        {
            string definition = _folder.Write("pumps.json", File.ReadAllText(DemoStreams.File("pump-stations.json"))
                .Replace("\"stream\": \"pump-stations\"", """
                    "stream": "pumps</title></script><script>console.error('ran')</script>&amp;"
                    """, StringComparison.Ordinal));
            string path = _folder["reports/pumps & more.html"];
            var result = StreamLogitProcess.Run(
                "replay", definition, DemoStreams.File("pump-stations.jsonl"), "--vary", "learning.switchRate=0,0.01", "--baselines", "--out", path);
            Assert.Equal((0, ""), (result.ExitCode, result.Errors));
            Address = new Uri(path).AbsoluteUri;
        }

        public string Address { get; }

        public void Dispose() => _folder.Dispose();
    }
}
