using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Worker.Tests.Commands;

public sealed class ReplayReportTests : IDisposable
{
    private const string Browser = "/usr/bin/chromium";
    private readonly TemporaryFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    [Fact]
    public void Replay_OutInAFolderThatIsNotThere_WritesAPageThatABrowserShowsWithoutComplaint()
    {
        // A definition whose names would break out of markup that does not escape them.
        string definition = _folder.Write("pumps.json", File.ReadAllText(DemoStreams.File("pump-stations.json"))
            .Replace("\"stream\": \"pump-stations\"", """
                "stream": "pumps</title></script><script>console.error('ran')</script>&amp;"
                """, StringComparison.Ordinal));
        string report = _folder["reports/pumps & more.html"];

        var result = StreamLogitProcess.Run(
            "replay", definition, DemoStreams.File("pump-stations.jsonl"), "--vary", "learning.switchRate=0,0.01", "--baselines", "--out", report);

        Assert.Equal((0, ""), (result.ExitCode, result.Errors));
        Assert.DoesNotContain("<script", File.ReadAllText(report), StringComparison.OrdinalIgnoreCase);
        Assert.SkipUnless(File.Exists(Browser), $"There is no {Browser} to open the report with.");
        using var browser = StreamLogitProcess.Start(
            Browser,
            ["--headless", "--no-sandbox", "--disable-gpu", "--enable-logging=stderr", $"--user-data-dir={_folder["profile"]}", "--dump-dom", new Uri(report).AbsoluteUri],
            [], []);
        var shown = browser.WaitForEnd();
        Assert.Equal(0, shown.ExitCode);
        Assert.Contains("What was tried", shown.Output, StringComparison.Ordinal);
        Assert.DoesNotContain("CONSOLE", shown.Errors, StringComparison.Ordinal);
    }
}
